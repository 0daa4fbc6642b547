import "server-only";
import { invalid, KnownError } from "./errors";

const LIMIT_BYTES = 5 * 1024 * 1024;

/**
 * Reads a JSON object of at most 5 MB; counts while reading, because a stated length can lie.
 * @throws KnownError too_large, unsupported_media, invalid
 */
export async function readJsonBody(request: Request): Promise<Record<string, unknown>> {
  const raw = await readLimited(request);
  if (raw.byteLength === 0) return {};
  const type = request.headers.get("Content-Type") ?? "";
  if (!/^application\/json\b/i.test(type)) {
    throw new KnownError("unsupported_media", "Send the body as application/json");
  }
  let parsed: unknown;
  try {
    parsed = JSON.parse(new TextDecoder("utf-8", { fatal: true }).decode(raw));
  } catch {
    throw invalid([{ path: "", message: "is not JSON in UTF-8" }], "The body could not be read");
  }
  if (typeof parsed !== "object" || parsed === null || Array.isArray(parsed)) {
    throw invalid([{ path: "", message: "must be a JSON object" }], "The body could not be read");
  }
  return parsed as Record<string, unknown>;
}

async function readLimited(request: Request): Promise<Uint8Array> {
  const stated = Number(request.headers.get("Content-Length") ?? 0);
  if (stated > LIMIT_BYTES) throw tooLarge();
  if (!request.body) return new Uint8Array();
  const parts: Uint8Array[] = [];
  let total = 0;
  const reader = request.body.getReader();
  for (;;) {
    const { done, value } = await reader.read();
    if (done) break;
    total += value.byteLength;
    if (total > LIMIT_BYTES) {
      await reader.cancel();
      throw tooLarge();
    }
    parts.push(value);
  }
  return Buffer.concat(parts, total);
}

const tooLarge = () =>
  new KnownError("too_large", "The body is larger than 5 MB; send fewer items at a time");
