import { createHash } from "node:crypto";
import canonicalize from "canonicalize";

export const GENESIS_HASH = Buffer.alloc(32);

export type ChainedFields = {
  seq: number;
  at: string;
  act: string;
  actorKind: string;
  actorId: string;
  onBehalfOf: string | null;
  subjectKind: string;
  subjectId: string;
  caseId: string | null;
  requestId: string;
  facts: string;
};

/** Canonical JSON of RFC 8785. @throws TypeError for what JSON cannot hold, such as NaN */
export function canonicalJson(value: unknown): string {
  const text = canonicalize(value);
  if (text === undefined) throw new TypeError("Only JSON values can be made canonical");
  return text;
}

/**
 * Hash of one entry: SHA-256 over the canonical JSON (RFC 8785) of its fields and the hash before it, in hex.
 * @returns 32 bytes
 */
export function entryHash(fields: ChainedFields, previousHash: Buffer): Buffer {
  return createHash("sha256")
    .update(canonicalJson({ ...fields, previous: previousHash.toString("hex") }), "utf8")
    .digest();
}
