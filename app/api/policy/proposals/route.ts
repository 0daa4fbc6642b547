import { route } from "@/lib/http";
import { proposePolicy } from "@/lib/policy/propose";

export const POST = route("POST /api/policy/proposals", proposePolicy);
