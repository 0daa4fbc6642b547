import "server-only";
import { endedSessions } from "@/db/schema/people";
import { inTransaction } from "@/db/tx";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { findPersonForSession } from "./read";
import type { SessionClaims } from "./session";

/** Ends one session at once: its token is refused from now on, however long it would still run. */
export async function signOut(ctx: Context, claims: SessionClaims): Promise<void> {
  const person = await findPersonForSession(ctx.db, claims);
  if (!person) return;
  const asPerson: Context = { ...ctx, actor: { kind: "person", ...person, key: null } };
  await inTransaction(ctx.db, async (tx) => {
    await tx.insert(endedSessions).ignore().values({ id: claims.sid, endedAt: ctx.now() });
    await appendTrail(asPerson, tx, {
      act: "person.signed_out",
      subjectKind: "person",
      subjectId: person.personId,
      facts: {},
    });
  });
}
