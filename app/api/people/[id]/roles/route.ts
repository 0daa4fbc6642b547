import { route } from "@/lib/http";
import { setRoles } from "@/lib/people/set-roles";

export const POST = route("POST /api/people/{id}/roles", setRoles);
