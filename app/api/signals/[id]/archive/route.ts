import { route } from "@/lib/http";
import { archiveSignal } from "@/lib/signals/archive-own";

export const POST = route("POST /api/signals/{id}/archive", archiveSignal);
