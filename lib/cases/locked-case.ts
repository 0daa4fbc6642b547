import "server-only";
import { and, count, eq, gt } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { cases, handOuts } from "@/db/schema/cases";
import { conflict, notFound } from "../errors";
import { type CaseChange, MOST_CLAIMS } from "./rules";
import type { CaseStateView } from "./schema";
import type { ShareCount } from "./shares";

export type LockedCase = typeof cases.$inferSelect;

/** Locks the case row until the transaction ends; the scorer and the trail's head may only be locked behind it. */
export async function lockCaseOrThrow(tx: Tx, caseId: string): Promise<LockedCase> {
  const [row] = await tx.select().from(cases).where(eq(cases.id, caseId)).for("update");
  if (!row) throw notFound("The case");
  return row;
}

/** Writes the change to the locked row and raises its revision. */
export async function changeCase(
  tx: Tx,
  row: LockedCase,
  change: CaseChange,
  now: Date,
): Promise<LockedCase> {
  const next = { ...row, ...change, revision: row.revision + 1, changedAt: now };
  const [result] = await tx
    .update(cases)
    .set({ ...change, revision: next.revision, changedAt: now })
    .where(and(eq(cases.id, row.id), eq(cases.revision, row.revision)));
  if (result.affectedRows !== 1) throw new Error(`Case ${row.id} changed under its lock`);
  return next;
}

/**
 * Locks the person's place in the hand-outs, so that two of their requests at once are counted one after the other.
 * @throws KnownError conflict when the person holds as many cases as one may
 */
export async function lockRoomForClaim(tx: Tx, personId: string, now: Date): Promise<ShareCount> {
  const row = (await lockHandOuts(tx, personId)) ?? (await beginHandOuts(tx, personId));
  const [held] = await tx
    .select({ count: count() })
    .from(cases)
    .where(and(eq(cases.claimedBy, personId), eq(cases.state, "claimed"), gt(cases.claimExpiresAt, now)));
  if ((held?.count ?? 0) >= MOST_CLAIMS) {
    throw conflict(`You hold ${MOST_CLAIMS} cases already; decide one, give one back or set one aside first`);
  }
  return row;
}

async function lockHandOuts(tx: Tx, personId: string): Promise<ShareCount | undefined> {
  const [row] = await tx.select().from(handOuts).where(eq(handOuts.personId, personId)).for("update");
  return row;
}

/** The first time; of two requests at once the second waits here and then finds the first one's row. */
async function beginHandOuts(tx: Tx, personId: string): Promise<ShareCount> {
  await tx.insert(handOuts).values({ personId }).onDuplicateKeyUpdate({ set: { personId } });
  return (await lockHandOuts(tx, personId)) ?? { sinceOverdue: 0, sinceSample: 0 };
}

export function stateView(row: LockedCase): CaseStateView {
  return {
    caseId: row.id,
    state: row.state,
    revision: row.revision,
    claimExpiresAt: row.claimExpiresAt?.toISOString() ?? null,
  };
}
