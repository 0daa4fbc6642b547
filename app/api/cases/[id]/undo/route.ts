import { undoDecision } from "@/lib/decisions/undo";
import { route } from "@/lib/http";

export const POST = route("POST /api/cases/{id}/undo", undoDecision);
