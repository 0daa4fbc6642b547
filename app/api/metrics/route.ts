import { route } from "@/lib/http";
import { readMetrics } from "@/lib/metrics";

export const GET = route("GET /api/metrics", readMetrics);
