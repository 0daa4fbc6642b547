import { route } from "@/lib/http";
import { revokeKey } from "@/lib/keys/revoke";

export const POST = route("POST /api/keys/{id}/revoke", revokeKey);
