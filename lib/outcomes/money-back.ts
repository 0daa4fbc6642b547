import "server-only";
import { inArray, isNotNull, sql } from "drizzle-orm";
import type { Executor, Tx } from "@/db/client";
import { outcomes } from "@/db/schema/outcomes";
import type { FieldError } from "../errors";
import { baseAmounts, type ToBase } from "../transactions/rates";
import type { Payment } from "./apply";
import type { Outcome } from "./read-item";
import { bringsMoneyBack, partInBase } from "./rules";

export type MoneyBack = { recoversBaseMinor: number | null } | FieldError;

/** Works out what outcomes bring back, against what has come back on their payments before. */
export class MoneyBackReader {
  private constructor(
    private readonly toBase: ToBase,
    private readonly backBefore: Map<string, number>,
  ) {}

  static async on(
    tx: Tx,
    items: readonly Outcome[],
    payments: ReadonlyMap<string, Payment>,
  ): Promise<MoneyBackReader> {
    const foreign = items.flatMap(({ currency, occurredAt }) => (currency ? [{ currency, occurredAt }] : []));
    return new MoneyBackReader(
      await baseAmounts(tx, foreign),
      await readBackBefore(tx, [...payments.keys()]),
    );
  }

  /** Adds what it answers to what has come back, so that outcomes of one batch cannot exceed a payment together. */
  read(outcome: Outcome, payment: Payment): MoneyBack {
    if (!bringsMoneyBack(outcome)) return { recoversBaseMinor: null };
    const { amountBaseMinor } = payment;
    // A payment in a currency without a rate is in no figure, so that nothing can be taken off it.
    if (amountBaseMinor === null) return { recoversBaseMinor: null };
    const part = this.partOf(outcome, { ...payment, amountBaseMinor });
    if (part === null) return { path: "currency", message: "has no rate for this outcome's day" };
    const back = (this.backBefore.get(payment.id) ?? 0) + part;
    if (back > amountBaseMinor) {
      return { path: "amount", message: "brings back more than was paid, with what has come back before" };
    }
    this.backBefore.set(payment.id, back);
    return { recoversBaseMinor: part };
  }

  private partOf(
    { amountMinor, currency, occurredAt }: Outcome,
    payment: { amountMinor: number; currency: string; amountBaseMinor: number },
  ): number | null {
    if (amountMinor === null || currency === null) return payment.amountBaseMinor;
    if (currency === payment.currency) return partInBase(amountMinor, payment);
    return this.toBase(amountMinor, currency, occurredAt);
  }
}

async function readBackBefore(db: Executor, transactionIds: readonly string[]): Promise<Map<string, number>> {
  if (transactionIds.length === 0) return new Map();
  const rows = await db
    .select({
      transactionId: outcomes.transactionId,
      back: sql`sum(${outcomes.recoversBaseMinor})`.mapWith(Number),
    })
    .from(outcomes)
    .where(
      sql`${inArray(outcomes.transactionId, [...transactionIds])} and ${isNotNull(outcomes.recoversBaseMinor)}`,
    )
    .groupBy(outcomes.transactionId);
  return new Map(
    rows.flatMap(({ transactionId, back }) => (transactionId ? [[transactionId, back] as const] : [])),
  );
}
