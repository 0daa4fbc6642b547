import { route } from "@/lib/http";
import { showUnsubscribePage, unsubscribe } from "@/lib/losses/unsubscribe";

export const GET = route("GET /api/unsubscribe/{token}", showUnsubscribePage);
export const POST = route("POST /api/unsubscribe/{token}", unsubscribe);
