import { noteOnCase } from "@/lib/cases/note";
import { route } from "@/lib/http";

export const POST = route("POST /api/cases/{id}/notes", noteOnCase);
