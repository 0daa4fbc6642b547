import { describeQueueEvents, streamQueueEvents } from "@/lib/cases/events";
import { route } from "@/lib/http";

export const GET = route("GET /api/queue/events", streamQueueEvents);
/** Without it Next would answer HEAD by opening a stream that nobody closes. */
export const HEAD = route("GET /api/queue/events", describeQueueEvents);
