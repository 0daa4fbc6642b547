import { route } from "@/lib/http";
import { verifyTrailAsked } from "@/lib/trail/verify-asked";

export const GET = route("GET /api/trail/verify", verifyTrailAsked);
