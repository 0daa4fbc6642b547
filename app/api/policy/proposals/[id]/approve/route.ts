import { route } from "@/lib/http";
import { approvePolicy } from "@/lib/policy/approve";

export const POST = route("POST /api/policy/proposals/{id}/approve", approvePolicy);
