import { saveDraft } from "@/lib/cases/save-draft";
import { route } from "@/lib/http";

export const PUT = route("PUT /api/cases/{id}/draft", saveDraft);
