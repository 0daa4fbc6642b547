import { route } from "@/lib/http";
import { readInfluence } from "@/lib/learning/influence";

export const GET = route("GET /api/learning/influence", readInfluence);
