import "server-only";
import { and, between, inArray } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { currencyRates } from "@/db/schema/transactions";
import { minorDigits } from "../money";
import { dayOf } from "./arrival-days";
import { readBaseCurrency } from "./base-currency";

/** No rates are made on weekends and holidays; one this old still stands for the day. */
const OLDEST_RATE_DAYS = 7;
const DAY_MS = 86_400_000;

export type ToBase = (amountMinor: number, currency: string, at: Date) => number | null;

/** Amounts in the base currency by the rate of their day, or the newest of the week before; null where there is none. */
export async function baseAmounts(
  db: Executor,
  payments: readonly { currency: string; occurredAt: Date }[],
): Promise<ToBase> {
  const base = await readBaseCurrency(db);
  const rates = await ratesFor(
    db,
    payments.filter(({ currency }) => currency !== base),
  );
  return (amountMinor, currency, at) => {
    if (currency === base) return amountMinor;
    const day = dayOf(at);
    const oldest = dayOf(new Date(at.getTime() - OLDEST_RATE_DAYS * DAY_MS));
    const rate = rates.get(currency)?.findLast((each) => each.day <= day && each.day >= oldest)?.rate;
    if (rate === undefined) return null;
    const shift = 10 ** ((minorDigits(base) ?? 2) - (minorDigits(currency) ?? 2));
    const baseMinor = Math.round(amountMinor * rate * shift);
    return Number.isSafeInteger(baseMinor) ? baseMinor : null;
  };
}

type Rate = { day: string; rate: number };

async function ratesFor(
  db: Executor,
  payments: readonly { currency: string; occurredAt: Date }[],
): Promise<Map<string, Rate[]>> {
  const byCurrency = new Map<string, Rate[]>();
  if (payments.length === 0) return byCurrency;
  const times = payments.map(({ occurredAt }) => occurredAt.getTime());
  const from = dayOf(new Date(times.reduce((a, b) => Math.min(a, b)) - OLDEST_RATE_DAYS * DAY_MS));
  const to = dayOf(new Date(times.reduce((a, b) => Math.max(a, b))));
  const rows = await db
    .select()
    .from(currencyRates)
    .where(
      and(
        inArray(currencyRates.currency, [...new Set(payments.map(({ currency }) => currency))]),
        between(currencyRates.day, from, to),
      ),
    )
    .orderBy(currencyRates.day);
  for (const { currency, ...rate } of rows) {
    const known = byCurrency.get(currency);
    if (known) known.push(rate);
    else byCurrency.set(currency, [rate]);
  }
  return byCurrency;
}
