import { listQueue } from "@/lib/cases/queue";
import { route } from "@/lib/http";

export const GET = route("GET /api/queue", listQueue);
