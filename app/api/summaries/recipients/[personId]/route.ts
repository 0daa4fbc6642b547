import { route } from "@/lib/http";
import { removeRecipient } from "@/lib/losses/remove-recipient";
import { setRecipient } from "@/lib/losses/set-recipient";

export const PUT = route("PUT /api/summaries/recipients/{personId}", setRecipient);
export const DELETE = route("DELETE /api/summaries/recipients/{personId}", removeRecipient);
