import { route } from "@/lib/http";
import { showScorer } from "@/lib/learning/show-scorer";

export const GET = route("GET /api/scorer", showScorer);
