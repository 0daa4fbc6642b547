import { decideCase } from "@/lib/decisions/decide";
import { route } from "@/lib/http";

export const POST = route("POST /api/cases/{id}/decision", decideCase);
