import { route } from "@/lib/http";
import { reactivatePerson } from "@/lib/people/set-state";

export const POST = route("POST /api/people/{id}/reactivate", reactivatePerson);
