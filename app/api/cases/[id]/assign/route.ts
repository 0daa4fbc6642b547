import { assignCase } from "@/lib/cases/assign";
import { route } from "@/lib/http";

export const POST = route("POST /api/cases/{id}/assign", assignCase);
