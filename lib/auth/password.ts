import "server-only";
import { randomBytes } from "node:crypto";
import { hash, verify } from "@node-rs/argon2";

/** Argon2id with the least memory and passes of OWASP's password storage advice (19 MiB, 2, 1). */
const ARGON2ID = { algorithm: 2, memoryCost: 19_456, timeCost: 2, parallelism: 1 };

export function hashPassword(password: string): Promise<string> {
  return hash(password.normalize("NFKC"), ARGON2ID);
}

/** With no hash the work is done all the same, so that the time taken does not tell whether an account exists. */
export async function verifyPassword(passwordHash: string | null, password: string): Promise<boolean> {
  const matches = await verify(passwordHash ?? (await hashOfNobody()), password.normalize("NFKC"));
  return passwordHash !== null && matches;
}

let ofNobody: Promise<string> | undefined;

function hashOfNobody(): Promise<string> {
  ofNobody ??= hashPassword(randomBytes(32).toString("base64"));
  return ofNobody;
}
