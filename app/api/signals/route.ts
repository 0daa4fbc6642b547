import { route } from "@/lib/http";
import { draftSignal } from "@/lib/signals/draft-own";
import { listSignals } from "@/lib/signals/read-signals";

export const GET = route("GET /api/signals", listSignals);
export const POST = route("POST /api/signals", draftSignal);
