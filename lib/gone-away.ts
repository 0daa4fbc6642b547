import { KnownError } from "./errors";

/**
 * The error to answer and log when the caller has left before the answer: an end of theirs, no fault of ours. Any
 * other error stays what it is, whoever has left meanwhile.
 */
export function orGoneAway(error: unknown, signal: AbortSignal): unknown {
  if (!(error instanceof Error)) return error;
  const code = "code" in error ? error.code : undefined;
  // Node's server ends a request whose socket closed with just these two words.
  const cutOff = code === "ECONNRESET" && error.message === "aborted";
  const stopped = error.name === "AbortError" || code === "ERR_STREAM_PREMATURE_CLOSE";
  return cutOff || (stopped && signal.aborted)
    ? new KnownError("gone_away", "The caller left before the answer")
    : error;
}
