import "server-only";
import type { Tx } from "@/db/client";
import { isDuplicate } from "@/db/errors";
import { demand } from "../auth/demand";
import { casesChanged } from "../cases/notify";
import type { Context } from "../context";
import { readScorerForScoring } from "../learning/held-scorer";
import { applyKeptOutcomes } from "../outcomes/apply-kept";
import { policyInForce } from "../policy/read";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { countArrivals } from "./arrival-days";
import { readIntakeSettings } from "./intake-settings";
import { acceptedResult } from "./results";
import type { TransactionResult, TransactionsView } from "./schema";
import { type ScoredPayment, scorePayments } from "./score-payments";
import { type Slot, sortItems } from "./sort-items";
import { type ScoredUnder, storePayments } from "./store-payments";

export type Batch = {
  source: string;
  /** As sent; every one is checked on its own. */
  items: readonly unknown[];
  /** Runs inside the transaction, before its trail entry, so that it commits with the payments or not at all. */
  alongside?: (tx: Tx, results: readonly TransactionResult[]) => Promise<void>;
};

/** Two senders of the same identifier at once: the slower one finds the other's payment the next time round. */
const RACES_AT_MOST = 5;

/**
 * Takes payments in: checks, scores, zones, and in one transaction stores them, opens cases and says so in the trail.
 * @returns one result per item, in order; a bad item costs no other
 */
export async function receiveTransactions(ctx: Context, batch: Batch): Promise<TransactionResult[]> {
  return (await receiveBatch(ctx, batch)).results;
}

/** As `receiveTransactions`, as the answer of the API, which an Idempotency-Key keeps whole. */
export async function receiveBatch(ctx: Context, batch: Batch): Promise<TransactionsView> {
  demand(ctx, "intake.send");
  for (let attempt = 1; ; attempt++) {
    const prepared = await prepare(ctx, batch);
    let opened: string[] = [];
    try {
      const answer = await writeOnce(ctx, async (tx) => {
        const { results, caseIds } = await store(ctx, tx, prepared, batch);
        opened = caseIds;
        return { results };
      });
      casesChanged(opened);
      return answer;
    } catch (error) {
      if (attempt >= RACES_AT_MOST || !isDuplicate(error)) throw error;
    }
  }
}

type Prepared = { slots: Slot[]; scored: ScoredPayment[]; under: ScoredUnder };

async function prepare(ctx: Context, { source, items }: Batch): Promise<Prepared> {
  const now = ctx.now();
  const [settings, policy, held] = await Promise.all([
    readIntakeSettings(ctx.db, source, now),
    policyInForce(ctx.db, now),
    readScorerForScoring(ctx.db),
  ]);
  const { slots, payments } = await sortItems(ctx.db, source, items, settings.exempt, now);
  const scored = await scorePayments(ctx.db, payments, held, policy, settings.sampleSecret, now);
  return {
    slots,
    scored,
    under: { policy, scorerVersion: held.version, signalSetVersion: held.signals.version, source, now },
  };
}

async function store(
  ctx: Context,
  tx: Tx,
  { slots, scored, under }: Prepared,
  { source, alongside }: Batch,
): Promise<{ results: TransactionResult[]; caseIds: string[] }> {
  const cases = await storePayments(tx, scored, under);
  const accepted = scored.map((one) =>
    acceptedResult("created", {
      externalId: one.payment.externalId,
      transactionId: one.id,
      action: one.action,
      logit: one.logit,
      holdExpiresAt: one.holdExpiresAt,
      caseId: cases.get(one.id) ?? null,
      policyVersion: under.policy.version,
      scorerVersion: under.scorerVersion,
    }),
  );
  const results = slots.map((slot) => {
    if ("result" in slot) return slot.result;
    const created = accepted[slot.place] as TransactionResult;
    return slot.isRepeat ? { ...created, status: "duplicate" as const } : created;
  });
  await countArrivals(
    tx,
    scored.map((one) => ({ occurredAt: one.payment.occurredAt, passed: one.zone === "pass" })),
  );
  await alongside?.(tx, results);
  // Behind the counts: it may lock the scorer and the trail's head, which come last in every write.
  await applyKeptOutcomes(
    ctx,
    tx,
    scored.map(({ id }) => id),
  );
  const count = (status: TransactionResult["status"]) =>
    results.filter((each) => each.status === status).length;
  await appendTrail(ctx, tx, {
    act: "transactions.received",
    subjectKind: "source",
    subjectId: source,
    facts: {
      created: count("created"),
      duplicates: count("duplicate"),
      rejected: count("rejected"),
      casesOpened: cases.size,
      firstTransactionId: scored[0]?.id ?? null,
      lastTransactionId: scored.at(-1)?.id ?? null,
      policyVersion: under.policy.version,
      scorerVersion: under.scorerVersion,
    },
  });
  return { results, caseIds: [...cases.values()] };
}
