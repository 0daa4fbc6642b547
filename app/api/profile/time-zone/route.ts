import { route } from "@/lib/http";
import { setTimeZone } from "@/lib/profile/set-time-zone";

export const PUT = route("PUT /api/profile/time-zone", setTimeZone);
