import { route } from "@/lib/http";
import { listSummaries } from "@/lib/losses/summaries";

export const GET = route("GET /api/summaries", listSummaries);
