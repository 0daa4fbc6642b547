import "server-only";
import { inArray } from "drizzle-orm";
import type { Database } from "@/db/client";
import { transactions } from "@/db/schema/transactions";
import type { PaymentFields } from "./facts";
import { readHistory } from "./history";
import type { PaymentTrace } from "./known-history";
import { extendSignals, type SignalSet } from "./signal-set";
import { type SignalVector, vectorOf } from "./vectors";

const IN_ONE_GO = 500;

/**
 * The signals of stored payments once more, as a set has them: history as of each payment's own time, with what arrived late by now,
 * and labels as known now. Identifiers that are not known are left out of the answer.
 */
export async function recomputeVectors(
  db: Database,
  transactionIds: readonly string[],
  set: SignalSet,
): Promise<Map<string, SignalVector>> {
  const vectors = new Map<string, SignalVector>();
  for (let from = 0; from < transactionIds.length; from += IN_ONE_GO) {
    const rows = await db
      .select()
      .from(transactions)
      .where(inArray(transactions.id, transactionIds.slice(from, from + IN_ONE_GO)));
    const payments = rows.map(storedPayment);
    const history = await readHistory(db, payments, { withIds: true });
    for (const [index, payment] of payments.entries()) {
      const signals = vectorOf(payment, history.of(payment));
      vectors.set(payment.id, extendSignals(set, signals, rows[index] as (typeof rows)[number]));
    }
  }
  return vectors;
}

function storedPayment(row: typeof transactions.$inferSelect): PaymentFields & PaymentTrace & { id: string } {
  return {
    id: row.id,
    occurredAtMs: row.occurredAt.getTime(),
    amountBaseMinor: row.amountBaseMinor,
    direction: row.direction,
    channel: row.channel,
    remote: row.remote === null ? null : row.remote === 1,
    accountId: row.accountId,
    counterpartyId: row.counterpartyId,
    cardRef: row.cardRef,
    deviceId: row.deviceId,
    counterpartyCountry: row.counterpartyCountry,
    accountCountry: row.accountCountry,
    authentication: row.authentication,
    accountOpenedAtMs: row.accountOpenedAt?.getTime() ?? null,
    upstreamScore: row.upstreamScore,
    ruleHits: row.ruleHits?.length ?? null,
  };
}
