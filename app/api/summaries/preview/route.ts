import { route } from "@/lib/http";
import { previewSummary } from "@/lib/losses/preview-summary";

export const GET = route("GET /api/summaries/preview", previewSummary);
