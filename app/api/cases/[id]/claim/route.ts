import { claimCase } from "@/lib/cases/claim";
import { route } from "@/lib/http";

export const POST = route("POST /api/cases/{id}/claim", claimCase);
