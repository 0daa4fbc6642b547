import { route } from "@/lib/http";
import { sendMailAgain } from "@/lib/mail/send-again";

export const POST = route("POST /api/summaries/{id}/send-again", sendMailAgain);
