import { route } from "@/lib/http";
import { previewSignal } from "@/lib/signals/preview-own";

export const GET = route("GET /api/signals/preview", previewSignal);
