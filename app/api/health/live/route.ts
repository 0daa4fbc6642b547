import { readLiveness } from "@/lib/health";
import { route } from "@/lib/http";

export const GET = route("GET /api/health/live", readLiveness);
