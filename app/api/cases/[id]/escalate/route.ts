import { escalateCase } from "@/lib/cases/escalate";
import { route } from "@/lib/http";

export const POST = route("POST /api/cases/{id}/escalate", escalateCase);
