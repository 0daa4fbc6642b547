import { route } from "@/lib/http";
import { readLosses } from "@/lib/losses/losses";

export const GET = route("GET /api/losses", readLosses);
