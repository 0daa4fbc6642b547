import { route } from "@/lib/http";
import { seeDriftWarning } from "@/lib/learning/see-drift-warning";

export const POST = route("POST /api/learning/drift/{id}/seen", seeDriftWarning);
