import "server-only";
import type { Actor } from "./context";
import { forbidden } from "./errors";

const SAFE_METHODS = new Set(["GET", "HEAD"]);

/**
 * A browser's cookie proves a session, not an intention: a write must come from our own pages.
 * Keys travel in a header that no foreign page can send along, so they are exempt.
 */
export function refuseForeignOrigin(request: Request, actor: Actor): void {
  if (SAFE_METHODS.has(request.method) || request.headers.has("Authorization")) return;
  if (actor.kind !== "person") return;
  const site = request.headers.get("Sec-Fetch-Site");
  if (site) {
    if (site === "same-origin") return;
    throw forbidden("This request came from another site");
  }
  const origin = request.headers.get("Origin");
  const host = request.headers.get("Host");
  // A sandboxed page names its origin "null", which is no address.
  if (!origin || !host || !URL.canParse(origin) || new URL(origin).host !== host)
    throw forbidden("This request came from another site");
}
