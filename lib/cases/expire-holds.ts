import "server-only";
import { and, asc, eq, inArray, lte, sql } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { policies } from "@/db/schema/policies";
import { transactions } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { newId } from "../new-id";
import type { PolicyTerms } from "../policy/schema";
import { appendTrail } from "../trail/append";
import type { Channel } from "../transactions/codes";
import { UNDECIDED_STATES } from "./codes";
import { casesChanged } from "./notify";

const BATCH = 500;

/**
 * Held payments that nobody decided in time are released or refused, as the sender was told they would be. The case
 * stays in the queue: whether it was fraud still wants an answer.
 */
export async function expireHolds(ctx: Context, signal: AbortSignal): Promise<void> {
  demand(ctx, "desk.work");
  while (!signal.aborted) {
    const expired = await expireBatch(ctx);
    casesChanged(expired);
    if (expired.length < BATCH) return;
  }
}

type Expired = { caseId: string; transactionId: string; channel: Channel; policyVersion: number };

async function expireBatch(ctx: Context): Promise<string[]> {
  const now = ctx.now();
  return inTransaction(ctx.db, async (tx) => {
    const rows = await lockExpired(tx, now);
    if (rows.length === 0) return [];
    const termsOf = await readTerms(tx, rows);
    const ends = { released: [] as string[], refused: [] as string[] };
    for (const { transactionId, channel, policyVersion } of rows) {
      const rule = termsOf.get(policyVersion)?.channels[channel];
      if (!rule) throw new Error(`Policy ${policyVersion} says nothing about ${channel}`);
      ends[rule.atExpiry === "release" ? "released" : "refused"].push(transactionId);
    }
    for (const paymentState of ["released", "refused"] as const) {
      const ids = ends[paymentState];
      if (ids.length > 0)
        await tx.update(transactions).set({ paymentState }).where(inArray(transactions.id, ids));
    }
    const caseIds = rows.map(({ caseId }) => caseId);
    // A verdict on a payment that is no longer held is another verdict: who had the case open has to look again.
    await tx
      .update(cases)
      .set({ revision: sql`${cases.revision} + 1`, changedAt: now })
      .where(inArray(cases.id, caseIds));
    await appendTrail(ctx, tx, {
      act: "holds.expired",
      subjectKind: "batch",
      subjectId: newId(),
      facts: { count: rows.length, ...ends },
    });
    return caseIds;
  });
}

/** A case is due before its hold ends, so the index by deadline finds them. */
async function lockExpired(tx: Tx, now: Date): Promise<Expired[]> {
  return tx
    .select({
      caseId: cases.id,
      transactionId: transactions.id,
      channel: transactions.channel,
      policyVersion: cases.policyVersion,
    })
    .from(cases)
    .innerJoin(transactions, eq(transactions.id, cases.transactionId))
    .where(
      and(
        inArray(cases.state, [...UNDECIDED_STATES]),
        lte(cases.dueAt, now),
        eq(transactions.paymentState, "held"),
        lte(transactions.holdExpiresAt, now),
      ),
    )
    .orderBy(asc(cases.id))
    .limit(BATCH)
    .for("update", { skipLocked: true });
}

/** The terms each payment came in under: they are what its sender was told. */
async function readTerms(tx: Tx, rows: readonly Expired[]): Promise<Map<number, PolicyTerms>> {
  const versions = [...new Set(rows.map(({ policyVersion }) => policyVersion))];
  const found = await tx
    .select({ version: policies.version, terms: policies.terms })
    .from(policies)
    .where(inArray(policies.version, versions));
  return new Map(found.flatMap(({ version, terms }) => (version === null ? [] : [[version, terms]])));
}
