import "server-only";
import { randomBytes } from "node:crypto";
import { isDuplicate } from "@/db/errors";
import { apiKeys } from "@/db/schema/people";
import { demand } from "../auth/demand";
import { hashOfKey } from "../auth/key-hash";
import { findActivePerson } from "../auth/read";
import type { Context } from "../context";
import { invalid, KnownError } from "../errors";
import { newId } from "../new-id";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { readKeyOrThrow } from "./read";
import { scopesProblem } from "./rules";
import type { AddKeyInput, AddKeyView } from "./schema";

/** The prefix lets a scanner for leaked secrets recognise a key. */
const newSecret = (): string => `cupel_${randomBytes(32).toString("base64url")}`;

/** Only the hash is stored, so an answer given again comes without the key. */
export async function addKey(ctx: Context, input: AddKeyInput): Promise<AddKeyView> {
  demand(ctx, "keys.manage");
  const { name, source, scopes, actsForPersonId } = input;
  const secret = newSecret();
  const answer = await writeOnce(ctx, async (tx) => {
    const person = actsForPersonId ? await findActivePerson(tx, actsForPersonId) : null;
    if (actsForPersonId && !person) {
      throw invalid([{ path: "actsForPersonId", message: "is nobody with an active account" }]);
    }
    const problem = scopesProblem(scopes, person?.roles ?? null);
    if (problem) throw invalid([{ path: "scopes", message: problem }]);
    const id = newId();
    await tx
      .insert(apiKeys)
      .values({
        id,
        name,
        source,
        hash: hashOfKey(secret),
        scopes,
        actsForPersonId: actsForPersonId ?? null,
        createdAt: ctx.now(),
      })
      .catch(refuseTakenName);
    const key = await readKeyOrThrow(tx, id);
    await appendTrail(ctx, tx, {
      act: "key.added",
      subjectKind: "key",
      subjectId: id,
      facts: { source, scopes, actsForPersonId: actsForPersonId ?? null },
    });
    return { key, secret: null };
  });
  return { ...answer, secret };
}

function refuseTakenName(error: unknown): never {
  if (!isDuplicate(error)) throw error;
  throw new KnownError("conflict", "There is a key of this name already", {
    errors: [{ path: "name", message: "is another key's name" }],
  });
}
