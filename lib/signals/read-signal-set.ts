import "server-only";
import { desc, eq, inArray } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { bytesToVector } from "@/db/columns";
import { signalSets, transactions } from "@/db/schema/transactions";
import { Breath } from "../breath";
import type { FormulaPayment } from "./formula-fields";
import { extendVector, padVector, type SetDefinition, type SignalSet, signalSetOf } from "./signal-set";

// A scorer reads one set all its life and a set never changes, so what was read once serves for good.
const setsByScorer = new Map<string, SignalSet>();
const MOST_KEPT = 64;

/** The set that a scorer reads. @throws Error where the set is not there */
export async function signalSetOfScorer(
  db: Executor,
  scorer: { id: string; signalSetVersion: number },
): Promise<SignalSet> {
  const known = setsByScorer.get(scorer.id);
  if (known) return known;
  const [row] = await db.select().from(signalSets).where(eq(signalSets.version, scorer.signalSetVersion));
  if (!row) throw new Error(`Signal set ${scorer.signalSetVersion} is not there`);
  const set = signalSetOf(row.version, row.definition as SetDefinition);
  const [oldest] = setsByScorer.keys();
  if (oldest !== undefined && setsByScorer.size >= MOST_KEPT) setsByScorer.delete(oldest);
  setsByScorer.set(scorer.id, set);
  return set;
}

/** The version that the last switch made. @throws Error on an installation without one */
export async function newestSetVersion(db: Executor): Promise<number> {
  const [row] = await db
    .select({ version: signalSets.version })
    .from(signalSets)
    .orderBy(desc(signalSets.version))
    .limit(1);
  if (!row) throw new Error("There is no signal set; the installation is not set up");
  return row.version;
}

/** What a formula reads of a stored payment. */
export const FORMULA_COLUMNS = {
  occurredAt: transactions.occurredAt,
  amountBaseMinor: transactions.amountBaseMinor,
  currency: transactions.currency,
  direction: transactions.direction,
  channel: transactions.channel,
  remote: transactions.remote,
  mcc: transactions.mcc,
  counterpartyCountry: transactions.counterpartyCountry,
  accountCountry: transactions.accountCountry,
  authentication: transactions.authentication,
  accountOpenedAt: transactions.accountOpenedAt,
  upstreamScore: transactions.upstreamScore,
  ruleHits: transactions.ruleHits,
  cardRef: transactions.cardRef,
  deviceId: transactions.deviceId,
  attributes: transactions.attributes,
} as const;

/** So few that turning them into objects holds nobody up. */
const IN_STATEMENT = 200;

/**
 * Stored vectors as the set has them, in the order given. Own signals are always measured from the stored payment, at
 * learning as at every re-run, so that both come to the same bits; without own signals nothing is read.
 */
export async function fitVectors(
  db: Executor,
  set: SignalSet,
  rows: readonly { transactionId: string; vector: Buffer }[],
): Promise<Float64Array[]> {
  if (!set.own.some(({ isOn }) => isOn)) {
    return rows.map(({ vector }) => padVector(set, bytesToVector(vector)));
  }
  const payments = await readPayments(
    db,
    rows.map(({ transactionId }) => transactionId),
  );
  const breath = new Breath();
  const fitted: Float64Array[] = [];
  for (const { transactionId, vector } of rows) {
    const payment = payments.get(transactionId);
    if (!payment) throw new Error(`Transaction ${transactionId} is not there`);
    fitted.push(extendVector(set, bytesToVector(vector), payment));
    await breath.take();
  }
  return fitted;
}

/** As `fitVectors`, of one. */
export async function fitVector(
  db: Executor,
  set: SignalSet,
  transactionId: string,
  vector: Buffer,
): Promise<Float64Array> {
  const [fitted] = await fitVectors(db, set, [{ transactionId, vector }]);
  return fitted as Float64Array;
}

async function readPayments(db: Executor, ids: readonly string[]): Promise<Map<string, FormulaPayment>> {
  const wanted = [...new Set(ids)];
  const payments = new Map<string, FormulaPayment>();
  for (let from = 0; from < wanted.length; from += IN_STATEMENT) {
    const rows = await db
      .select({ id: transactions.id, ...FORMULA_COLUMNS })
      .from(transactions)
      .where(inArray(transactions.id, wanted.slice(from, from + IN_STATEMENT)));
    for (const { id, ...payment } of rows) payments.set(id, payment);
  }
  return payments;
}
