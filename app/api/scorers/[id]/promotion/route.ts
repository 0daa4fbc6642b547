import { route } from "@/lib/http";
import { proposePromotion } from "@/lib/learning/propose-promotion";

export const POST = route("POST /api/scorers/{id}/promotion", proposePromotion);
