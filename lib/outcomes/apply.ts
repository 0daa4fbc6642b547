import "server-only";
import { eq, inArray } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { outcomes } from "@/db/schema/outcomes";
import { transactions } from "@/db/schema/transactions";
import { labelFromOutcomes, type OutcomeLabel } from "../learning/label-outcomes";
import { labelsInForce } from "../learning/place";
import { bookOutcome } from "../losses/book";
import { settleRecoveries } from "../losses/recoveries";
import { policyInForce } from "../policy/read";
import type { Outcome } from "./read-item";
import { bringsMoneyBack, labelOf, mayClear } from "./rules";

export type OutcomeToApply = Outcome & { outcomeId: string; transactionId: string };

/**
 * Locks the payments and the cases on them, cases first and each by id, as decisions do.
 * Whoever applies outcomes holds these before the scorer.
 */
export async function lockPayments(tx: Tx, transactionIds: readonly string[]) {
  const ids = [...new Set(transactionIds)].sort();
  if (ids.length === 0)
    return { payments: new Map<string, Payment>(), caseStates: new Map<string, string>() };
  const locked = await tx
    .select({ transactionId: cases.transactionId, state: cases.state })
    .from(cases)
    .where(inArray(cases.transactionId, ids))
    .orderBy(cases.id)
    .for("update");
  const rows = await tx
    .select()
    .from(transactions)
    .where(inArray(transactions.id, ids))
    .orderBy(transactions.id)
    .for("update");
  return {
    payments: new Map(rows.map((row) => [row.id, row])),
    caseStates: new Map<string, string>(locked.map((row) => [row.transactionId, row.state])),
  };
}

export type Payment = typeof transactions.$inferSelect;
export type LockedPayments = Awaited<ReturnType<typeof lockPayments>>;

/**
 * Books what stored outcomes say of locked payments: labels where nothing stronger stands, their money, and the money
 * that came back. @returns how many labels changed
 */
export async function applyOutcomes(
  tx: Tx,
  now: Date,
  items: readonly OutcomeToApply[],
  locked: LockedPayments,
): Promise<number> {
  if (items.length === 0) return 0;
  const labels = await labelsOf(tx, items, locked);
  const effects = await labelFromOutcomes(tx, now, labels);
  const changed = effects.filter((effect) => effect.changed);
  if (changed.length > 0) {
    const { terms } = await policyInForce(tx, now);
    for (const { outcomeId, transactionId, label } of changed) {
      await bookOutcome(tx, {
        outcomeId,
        transactionId,
        verdict: label === 1 ? "fraudulent" : "legitimate",
        typology: label === 1 ? "other" : null,
        terms,
        bookedAt: now,
      });
    }
  }
  await settleMoneyBack(tx, now, items, locked);
  const ids = items.map((item) => item.outcomeId);
  await tx.update(outcomes).set({ appliedAt: now }).where(inArray(outcomes.id, ids));
  return changed.length;
}

async function labelsOf(
  tx: Tx,
  items: readonly OutcomeToApply[],
  { caseStates }: LockedPayments,
): Promise<OutcomeLabel[]> {
  const named = items.flatMap((item) => {
    const label = labelOf(item);
    return label === null ? [] : [{ outcomeId: item.outcomeId, transactionId: item.transactionId, label }];
  });
  const ids = named.map((item) => item.transactionId);
  const labelled = new Set((await labelsInForce(tx, ids)).keys());
  return named.filter(({ transactionId, label }) => {
    const hasLabel = labelled.has(transactionId);
    const caseState = caseStates.get(transactionId) ?? null;
    if (label === -1 && !mayClear({ hasLabel, caseState })) return false;
    labelled.add(transactionId);
    return true;
  });
}

/** Only a payment whose label is fraudulent has a loss to recover from; other money is kept with its outcome. */
async function settleMoneyBack(
  tx: Tx,
  now: Date,
  items: readonly OutcomeToApply[],
  { payments }: LockedPayments,
): Promise<void> {
  const ids = new Set(items.filter(bringsMoneyBack).map((item) => item.transactionId));
  for (const transactionId of ids) {
    const [row] = await tx
      .select({ label: transactions.label })
      .from(transactions)
      .where(eq(transactions.id, transactionId));
    const occurredAt = payments.get(transactionId)?.occurredAt;
    if (occurredAt && row?.label === 1) await settleRecoveries(tx, { transactionId, occurredAt }, true, now);
  }
}
