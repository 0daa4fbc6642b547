import { route } from "@/lib/http";
import { deactivatePerson } from "@/lib/people/set-state";

export const POST = route("POST /api/people/{id}/deactivate", deactivatePerson);
