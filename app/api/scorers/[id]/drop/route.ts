import { route } from "@/lib/http";
import { dropCandidate } from "@/lib/learning/drop-candidate";

export const POST = route("POST /api/scorers/{id}/drop", dropCandidate);
