import "server-only";
import { eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { trail, trailHead } from "@/db/schema/trail";
import type { Actor, Context } from "../context";
import { canonicalJson, entryHash } from "./chain";

export type TrailEntry = {
  /** Past tense, in the trade's words: `case.decided`, `policy.approved`. */
  act: string;
  subjectKind: string;
  subjectId: string;
  caseId?: string | null;
  /** References, codes and numbers only: no names, notes or other personal text. */
  facts: Record<string, unknown>;
};

/**
 * Appends to the chain inside the caller's transaction. Call it last: the head is the lock
 * that every writer shares.
 */
export async function appendTrail(ctx: Context, tx: Tx, ...entries: TrailEntry[]): Promise<void> {
  const [head] = await tx.select().from(trailHead).where(eq(trailHead.id, 1)).for("update");
  if (!head) throw new Error("The trail has no head row; the database is not migrated");
  let { seq, hash } = head;
  const actor = actorFields(ctx.actor);
  const at = ctx.now();
  const rows = entries.map((entry) => {
    const fields = {
      seq: ++seq,
      at: at.toISOString(),
      act: entry.act,
      ...actor,
      subjectKind: entry.subjectKind,
      subjectId: entry.subjectId,
      caseId: entry.caseId ?? null,
      requestId: ctx.requestId,
      facts: canonicalJson(entry.facts),
    };
    const previousHash = hash;
    hash = entryHash(fields, previousHash);
    return { ...fields, at, previousHash, hash };
  });
  await tx.insert(trail).values(rows);
  await tx.update(trailHead).set({ seq, hash }).where(eq(trailHead.id, 1));
}

function actorFields(actor: Actor) {
  switch (actor.kind) {
    case "person":
      return actor.key
        ? { actorKind: "key" as const, actorId: actor.key.id, onBehalfOf: actor.personId }
        : { actorKind: "person" as const, actorId: actor.personId, onBehalfOf: null };
    case "key":
      return { actorKind: "key" as const, actorId: actor.id, onBehalfOf: null };
    case "system":
      return { actorKind: "system" as const, actorId: actor.job, onBehalfOf: null };
    case "anonymous":
      return { actorKind: "anonymous" as const, actorId: "anonymous", onBehalfOf: null };
  }
}
