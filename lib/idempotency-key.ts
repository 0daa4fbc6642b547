import { createHash } from "node:crypto";
import type { Context } from "./context";
import { invalid } from "./errors";
import { canonicalJson } from "./trail/chain";

/** The caller's own name for a POST, so that sending it again is safe. @throws KnownError invalid */
export function keyOf(request: Request): string | null {
  const key = request.headers.get("Idempotency-Key");
  if (request.method !== "POST" || key === null) return null;
  if (!/^[\x21-\x7e]{1,128}$/.test(key)) {
    throw invalid([{ path: "Idempotency-Key", message: "needs 1 to 128 visible ASCII characters" }]);
  }
  return key;
}

/** What the key was used with: the same content again gets the first answer, any other is refused. */
export function idempotencyOf(
  key: string | null,
  content: { route: string } & Record<string, unknown>,
): Context["idempotency"] {
  if (key === null) return null;
  return { key, requestHash: createHash("sha256").update(canonicalJson(content)).digest() };
}
