import { assignMany } from "@/lib/floor/assign-many";
import { route } from "@/lib/http";

export const POST = route("POST /api/floor/assign", assignMany);
