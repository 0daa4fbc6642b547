import { route } from "@/lib/http";
import { readSummary } from "@/lib/losses/summaries";

export const GET = route("GET /api/summaries/{id}", readSummary);
