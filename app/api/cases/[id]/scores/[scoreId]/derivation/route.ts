import { deriveScore } from "@/lib/audit/derive-score";
import { route } from "@/lib/http";

export const GET = route("GET /api/cases/{id}/scores/{scoreId}/derivation", deriveScore);
