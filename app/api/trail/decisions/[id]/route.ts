import { readDecisionRecord } from "@/lib/audit/decision-record";
import { route } from "@/lib/http";

export const GET = route("GET /api/trail/decisions/{id}", readDecisionRecord);
