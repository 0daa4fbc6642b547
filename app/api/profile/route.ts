import { route } from "@/lib/http";
import { readProfile } from "@/lib/profile/read";

export const GET = route("GET /api/profile", readProfile);
