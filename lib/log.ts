import "server-only";
import pino from "pino";

/** Requests are logged by route pattern, status and actor id; never bodies, queries or headers. */
export const log = pino({
  level: process.env.LOG_LEVEL ?? "info",
  base: undefined,
  timestamp: pino.stdTimeFunctions.isoTime,
});
