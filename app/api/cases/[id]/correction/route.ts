import { correctDecision } from "@/lib/decisions/correct";
import { route } from "@/lib/http";

export const POST = route("POST /api/cases/{id}/correction", correctDecision);
