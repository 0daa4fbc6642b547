import { listFloorCases } from "@/lib/floor/list-cases";
import { route } from "@/lib/http";

export const GET = route("GET /api/floor/cases", listFloorCases);
