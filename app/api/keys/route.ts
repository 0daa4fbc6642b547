import { route } from "@/lib/http";
import { addKey } from "@/lib/keys/add";
import { listKeys } from "@/lib/keys/read";

export const GET = route("GET /api/keys", listKeys);
export const POST = route("POST /api/keys", addKey);
