import "server-only";
import { STATUS_CODES } from "node:http";
import { KnownError } from "./errors";
import { log } from "./log";

/** `application/problem+json` of RFC 9457. An unknown error is logged and answered with its request id only. */
export function problemResponse(error: unknown, requestId: string): Response {
  if (error instanceof KnownError) {
    return problem(
      error.status,
      error.message,
      requestId,
      {
        code: error.code,
        ...(error.errors.length > 0 && { errors: error.errors }),
      },
      error.headers,
    );
  }
  log.error({ requestId, err: error }, "A request failed");
  return problem(500, `Something failed on our side. Quote request ${requestId}.`, requestId, {
    code: "internal",
  });
}

function problem(
  status: number,
  detail: string,
  requestId: string,
  extensions: Record<string, unknown>,
  headers: Readonly<Record<string, string>> = {},
): Response {
  const body = {
    title: STATUS_CODES[status] ?? "No answer",
    status,
    detail,
    instance: `urn:uuid:${requestId}`,
    ...extensions,
  };
  return new Response(JSON.stringify(body), {
    status,
    headers: { ...headers, "Content-Type": "application/problem+json" },
  });
}
