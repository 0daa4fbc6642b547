import { readFloor } from "@/lib/floor/overview";
import { route } from "@/lib/http";

export const GET = route("GET /api/floor", readFloor);
