import { route } from "@/lib/http";
import { proposeSwitch } from "@/lib/signals/propose-switch";

export const POST = route("POST /api/signals/{id}/switch", proposeSwitch);
