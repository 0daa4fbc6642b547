import { createHash } from "node:crypto";
import { inArray } from "drizzle-orm";
import { createDatabase, type Database } from "@/db/client";
import { bytesToVector } from "@/db/columns";
import { labelledEntities, scores, transactions } from "@/db/schema/transactions";
import { environment } from "@/lib/env";
import { newId } from "@/lib/new-id";
import { receiveTransactions } from "@/lib/transactions/receive";
import type { Row } from "../../support/bench";
import { contextOf } from "../../support/people";
import { ensureInstalled } from "./install";
import type { StreamPayment } from "./stream-payments";
import { StreamLabels, type StreamVectors } from "./stream-vectors";

/** The second day, and one that looks back on thirty others. */
const SAMPLE_DAYS = [1, 34];
const PAYMENTS_A_DAY = 1_000;
const ROWS_IN_INSERT = 1_000;
/** Besides all fraud, one payment in so many is labelled. */
const LABELLED_ONE_IN = 5;

/**
 * Vectors of some days as the product's own intake scores them, from the history and the labels in its database,
 * against those of the stream kept in memory.
 */
export async function compareWithIntake(stream: StreamVectors): Promise<Row> {
  const { db, close } = createDatabase(environment().DATABASE_URL, 4);
  try {
    await ensureInstalled(db);
    let [equal, compared] = [0, 0];
    const stored = new Set<number>();
    const known = new StreamLabels();
    for (const day of SAMPLE_DAYS) {
      const first = stream.payments.findIndex((payment) => payment.day === day);
      await storeHistory(db, stream.payments, first, stored, known);
      const vectors = await receive(db, stream.payments, first);
      vectors.forEach((vector, i) => {
        stored.add(first + i);
        compared += 1;
        if (vector.equals(Buffer.from(stream.of(first + i, known).buffer))) equal += 1;
      });
    }
    return {
      name: `vectors of days ${SAMPLE_DAYS.map((day) => day + 1).join(" and ")} against the intake's`,
      measured: `${equal} of ${compared} equal to the bit`,
      limit: "all",
      ok: equal === compared,
    };
  } finally {
    await close();
  }
}

/** Stores what happened before to the accounts and counterparties of the day's first payments, some of it labelled. */
async function storeHistory(
  db: Database,
  payments: readonly StreamPayment[],
  first: number,
  stored: Set<number>,
  known: StreamLabels,
): Promise<void> {
  const sample = payments.slice(first, first + PAYMENTS_A_DAY);
  const accounts = new Set(sample.map((payment) => payment.accountId));
  const counterparties = new Set(sample.map((payment) => payment.counterpartyId));
  const past = payments
    .slice(0, first)
    .map((payment, index) => ({ payment, index, id: newId() }))
    .filter(({ payment }) => accounts.has(payment.accountId) || counterparties.has(payment.counterpartyId))
    .filter(({ index }) => !stored.has(index));
  for (let from = 0; from < past.length; from += ROWS_IN_INSERT) {
    const rows = past.slice(from, from + ROWS_IN_INSERT);
    await db.insert(transactions).values(rows.map(({ payment, id }) => storedPayment(payment, id)));
    const labelled = rows.filter(({ payment, index }) => payment.isFraud || index % LABELLED_ONE_IN === 0);
    for (const { payment } of labelled) known.add(payment);
    if (labelled.length > 0) await db.insert(labelledEntities).values(labelled.flatMap(labelRows));
  }
  for (const { index } of past) stored.add(index);
}

function storedPayment(
  { externalId, atMs, amountMinor, accountId, counterpartyId }: StreamPayment,
  id: string,
) {
  return {
    id,
    source: "history",
    externalId,
    contentHash: createHash("sha256").update(id).digest(),
    receivedAt: new Date(atMs),
    occurredAt: new Date(atMs),
    amountMinor,
    currency: "EUR",
    amountBaseMinor: amountMinor,
    direction: "outgoing" as const,
    channel: "card_present" as const,
    accountId,
    counterpartyId,
    action: "pass" as const,
    paymentState: "settled" as const,
  };
}

function labelRows({ payment, id }: { payment: StreamPayment; id: string }) {
  const occurredAt = new Date(payment.atMs);
  const label = { transactionId: id, label: payment.isFraud ? 1 : -1, occurredAt, labelledAt: occurredAt };
  return [
    { ...label, entityKind: "account" as const, entityKey: payment.accountId },
    { ...label, entityKind: "counterparty" as const, entityKey: payment.counterpartyId },
  ];
}

/** The day's first payments through the intake. @returns their vectors as stored, in the same order */
async function receive(db: Database, payments: readonly StreamPayment[], first: number): Promise<Buffer[]> {
  const items = payments.slice(first, first + PAYMENTS_A_DAY).map((payment) => ({
    externalId: payment.externalId,
    occurredAt: new Date(payment.atMs).toISOString(),
    amount: payment.amount,
    currency: "EUR",
    channel: "card_present",
    accountId: payment.accountId,
    counterpartyId: payment.counterpartyId,
  }));
  const ctx = contextOf(db, { kind: "system", job: "benchmark" });
  const results = await receiveTransactions(ctx, { source: "bench", items });
  const ids = results.map((result) => ("transactionId" in result ? result.transactionId : null));
  const rows = await db
    .select({ id: scores.transactionId, vector: scores.vector })
    .from(scores)
    .where(
      inArray(
        scores.transactionId,
        ids.flatMap((id) => id ?? []),
      ),
    );
  const vectors = new Map(rows.map((row) => [row.id, row.vector]));
  return ids.map((id) => {
    const vector = id ? vectors.get(id) : undefined;
    if (!vector) throw new Error("A payment of the stream was not taken in");
    return Buffer.from(bytesToVector(vector).buffer);
  });
}
