import { setCaseWaiting } from "@/lib/cases/wait";
import { route } from "@/lib/http";

export const POST = route("POST /api/cases/{id}/wait", setCaseWaiting);
