import { listScores } from "@/lib/audit/list-scores";
import { route } from "@/lib/http";

export const GET = route("GET /api/cases/{id}/scores", listScores);
