import type { PolicyTerms } from "../policy/schema";

/** `running`: the week is not over. `immature`: labels may still come or change. `mature`: the figures are settled. */
export type Maturity = { state: "running" | "immature" | "mature"; maturesAt: Date };

type Question = { by: "transaction" | "booking"; end: Date; now: Date; days: PolicyTerms["maturityDays"] };

const DAY_MS = 24 * 60 * 60 * 1000;

/**
 * A week of payments is mature once the slowest kind of payment has had its days for outcomes to arrive. What was
 * booked in a week no longer changes when the week is over, since corrections are booked when they happen.
 */
export function maturityOf({ by, end, now, days }: Question): Maturity {
  const waitDays = by === "booking" ? 0 : Math.max(days.cards, days.other);
  const maturesAt = new Date(end.getTime() + waitDays * DAY_MS);
  if (now < end) return { state: "running", maturesAt };
  return { state: now < maturesAt ? "immature" : "mature", maturesAt };
}
