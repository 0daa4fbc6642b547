import { route } from "@/lib/http";
import { changeSignal } from "@/lib/signals/change-own";

export const PUT = route("PUT /api/signals/{id}", changeSignal);
