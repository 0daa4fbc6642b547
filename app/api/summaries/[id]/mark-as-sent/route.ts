import { route } from "@/lib/http";
import { markMailAsSent } from "@/lib/mail/mark-as-sent";

export const POST = route("POST /api/summaries/{id}/mark-as-sent", markMailAsSent);
