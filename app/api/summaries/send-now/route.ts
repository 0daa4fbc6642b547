import { route } from "@/lib/http";
import { sendSummaryNow } from "@/lib/losses/send-summary-now";

export const POST = route("POST /api/summaries/send-now", sendSummaryNow);
