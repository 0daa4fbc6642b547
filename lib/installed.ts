import "server-only";
import { KnownError } from "./errors";

/** Instrumentation and routes have a copy of this module each; what is known of the process hangs here. */
const shared = globalThis as typeof globalThis & { cupelInstalled?: boolean };

/** How soon a caller may ask again: the server itself tries about as often. */
const RETRY_AFTER_SECONDS = 5;

/** The database is migrated, and a policy and a scorer are in use. */
export function noteInstalled(): void {
  shared.cupelInstalled = true;
}

export const isInstalled = (): boolean => shared.cupelInstalled === true;

/** @throws KnownError unavailable, with Retry-After, between the start of the process and `noteInstalled` */
export function refuseUntilInstalled(): void {
  if (isInstalled()) return;
  throw new KnownError("unavailable", "The server is getting ready; send the request again in a moment", {
    headers: { "Retry-After": String(RETRY_AFTER_SECONDS) },
  });
}
