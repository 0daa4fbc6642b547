import { readRug } from "@/lib/cases/rug";
import { route } from "@/lib/http";

export const GET = route("GET /api/queue/rug", readRug);
