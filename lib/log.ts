import "server-only";
import pino from "pino";
import { faultOf } from "./fault";

/**
 * Requests are logged by route pattern, status and actor id; never bodies, queries or headers. An error stands under
 * `err`, without the values of a query that failed; beside it goes a text of ours, or its message would be that text.
 */
export const log = pino({
  level: process.env.LOG_LEVEL ?? "info",
  base: undefined,
  serializers: { err: faultOf },
  timestamp: pino.stdTimeFunctions.isoTime,
});
