import "server-only";
import { and, desc, eq, inArray, isNull } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { outcomes } from "@/db/schema/outcomes";
import { transactions } from "@/db/schema/transactions";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { applyOutcomes, lockPayments, type OutcomeToApply } from "./apply";
import { MoneyBackReader } from "./money-back";

/**
 * Applies outcomes that came before their payments. Intake calls it inside its transaction, after the payments, their
 * scores and cases are stored and before its own trail entry. It costs one look into an index while none is kept.
 */
export async function applyKeptOutcomes(
  ctx: Context,
  tx: Tx,
  transactionIds: readonly string[],
): Promise<void> {
  const kept = await findKept(tx, transactionIds);
  if (kept.length === 0) return;
  const now = ctx.now();
  const locked = await lockPayments(
    tx,
    kept.map((item) => item.transactionId),
  );
  const moneyBack = await MoneyBackReader.on(tx, kept, locked.payments);
  const sound: OutcomeToApply[] = [];
  for (const item of kept) {
    const payment = locked.payments.get(item.transactionId);
    if (!payment) continue;
    const money = moneyBack.read(item, payment);
    const problem = "path" in money ? `${money.path} ${money.message}` : null;
    const recoversBaseMinor = "path" in money ? null : money.recoversBaseMinor;
    await tx
      .update(outcomes)
      .set({ transactionId: item.transactionId, recoversBaseMinor, problem })
      .where(eq(outcomes.id, item.outcomeId));
    if (problem === null) sound.push(item);
  }
  const labels = await applyOutcomes(tx, now, sound, locked);
  await appendTrail(ctx, tx, {
    act: "outcomes.applied",
    subjectKind: "outcome",
    subjectId: kept[0]?.outcomeId ?? "",
    facts: { outcomeIds: kept.map((item) => item.outcomeId), refused: kept.length - sound.length, labels },
  });
}

async function findKept(tx: Tx, transactionIds: readonly string[]): Promise<OutcomeToApply[]> {
  if (transactionIds.length === 0) return [];
  const [any] = await tx
    .select({ id: outcomes.id })
    .from(outcomes)
    .where(isNull(outcomes.transactionId))
    .limit(1);
  if (!any) return [];
  const rows = await tx
    .select({ outcome: outcomes, transactionId: transactions.id })
    .from(transactions)
    .innerJoin(
      outcomes,
      and(eq(outcomes.externalId, transactions.externalId), isNull(outcomes.transactionId)),
    )
    .where(inArray(transactions.id, [...transactionIds]))
    .orderBy(outcomes.id, desc(eq(transactions.source, outcomes.source)), transactions.seq)
    .for("update");
  // One identifier in two sources: the outcome's own source has it, else the first to be there.
  const byOutcome = new Map(
    rows
      .toReversed()
      .map(({ outcome, transactionId }) => [
        outcome.id,
        { ...outcome, outcomeId: outcome.id, transactionId },
      ]),
  );
  return [...byOutcome.values()].toReversed();
}
