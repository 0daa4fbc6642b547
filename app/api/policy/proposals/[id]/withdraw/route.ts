import { route } from "@/lib/http";
import { withdrawPolicy } from "@/lib/policy/withdraw";

export const POST = route("POST /api/policy/proposals/{id}/withdraw", withdrawPolicy);
