import "server-only";
import { createHash } from "node:crypto";

/** What is stored of an API key: its 256 random bits need no slow hash. */
export const hashOfKey = (key: string): Buffer => createHash("sha256").update(key).digest();
