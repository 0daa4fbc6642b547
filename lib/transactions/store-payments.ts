import "server-only";
import { and, eq, inArray } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { vectorToBytes } from "@/db/columns";
import { insertRows } from "@/db/insert-rows";
import { scores, transactions } from "@/db/schema/transactions";
import { type CaseToOpen, openCases } from "../cases/open";
import type { PolicyInForce } from "../policy/read";
import type { ScoredPayment } from "./score-payments";

export type ScoredUnder = {
  policy: PolicyInForce;
  scorerVersion: number;
  signalSetVersion: number;
  source: string;
  now: Date;
};

/**
 * Writes payments with their scores and opens cases for those to be reviewed and those drawn.
 * @returns ids of the cases by id of their payment
 * @throws the database's error on a duplicate key where another sender was faster
 */
export async function storePayments(
  tx: Tx,
  scored: readonly ScoredPayment[],
  under: ScoredUnder,
): Promise<Map<string, string>> {
  await insertRows(
    tx,
    transactions,
    scored.map((one) => transactionRow(one, under)),
  );
  await insertRows(
    tx,
    scores,
    scored.map((one) => scoreRow(one, under)),
  );
  return openCasesFor(tx, scored, under);
}

async function openCasesFor(
  tx: Tx,
  scored: readonly ScoredPayment[],
  { policy, now }: ScoredUnder,
): Promise<Map<string, string>> {
  const wanted = scored.filter(
    ({ zone, sampleProbability }) => zone !== "pass" || sampleProbability !== null,
  );
  if (wanted.length === 0) return new Map();
  const ids = wanted.map(({ id }) => id);
  // Read back: an auto-increment need not go in steps of one.
  const rows = await tx
    .select({ id: scores.id, transactionId: scores.transactionId })
    .from(scores)
    .where(and(inArray(scores.transactionId, ids), eq(scores.kind, "arrival")));
  const scoreIds = new Map(rows.map((row) => [row.transactionId, row.id]));
  const toOpen = wanted.map(
    ({ id, zone, sampleProbability, holdExpiresAt }): CaseToOpen => ({
      transactionId: id,
      kind: zone === "pass" ? "sample" : "alert",
      zone,
      scoreId: scoreIds.get(id) as number,
      sampleProbability,
      holdExpiresAt,
    }),
  );
  const caseIds = await openCases(tx, toOpen, policy, now);
  return new Map(ids.map((id, i) => [id, caseIds[i] as string]));
}

function transactionRow(
  scored: ScoredPayment,
  { source, now }: ScoredUnder,
): typeof transactions.$inferInsert {
  const { payment } = scored;
  return {
    ...payment,
    id: scored.id,
    source,
    receivedAt: now,
    amountBaseMinor: scored.amountBaseMinor,
    remote: payment.remote === null ? null : Number(payment.remote),
    action: scored.action,
    paymentState: scored.paymentState,
    holdExpiresAt: scored.holdExpiresAt,
  };
}

function scoreRow(
  scored: ScoredPayment,
  { policy, scorerVersion, signalSetVersion, now }: ScoredUnder,
): typeof scores.$inferInsert {
  return {
    transactionId: scored.id,
    kind: "arrival",
    takenAt: now,
    vector: vectorToBytes(scored.vector),
    missing: Buffer.from(scored.missing),
    signalSetVersion,
    scorerVersion,
    policyVersion: policy.version,
    logit: scored.logit,
    leverage: scored.leverage,
    zone: scored.zone,
  };
}
