import { route } from "@/lib/http";
import { readRecipients } from "@/lib/losses/summaries";

export const GET = route("GET /api/summaries/recipients", readRecipients);
