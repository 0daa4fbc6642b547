import { route } from "@/lib/http";
import { declinePolicy } from "@/lib/policy/decline";

export const POST = route("POST /api/policy/proposals/{id}/decline", declinePolicy);
