import { horvitzThompson } from "../quality/horvitz-thompson";
import { weightedSumInterval } from "../quality/weighted-sum-interval";
import type { PassedView } from "./passed-schema";

/** A passed payment that was drawn with a known chance, and what became of its case. */
export type DrawnPayment = {
  probability: number;
  verdict: "fraudulent" | "other" | null;
  isLapsed: boolean;
  /** In minor units of the base currency; null while no rate is known. */
  amountBaseMinor: number | null;
};

type Figures = Pick<
  PassedView,
  "passed" | "drawn" | "decided" | "waiting" | "lapsed" | "foundFraudulent" | "estimate" | "reason"
>;

/**
 * How many of the passed payments are fraudulent, and what they are worth: Horvitz–Thompson totals over the draws that
 * have a verdict, each draw independent of the others. Draws without a verdict (waiting or lapsed) are taken to be
 * like those that have one: the chance of each decided draw is multiplied by the decided part of all that the draws
 * stand for (the one-class weighting adjustment of Oh and Scheuren 1983). A draw's case is handed out by its turn and
 * not by its score, which is what that rests on. Intervals: Fay and Feuer (1997), since a handful of finds is usual;
 * they hold at least what was found and at most what passed.
 */
export function estimatePassed(draws: readonly DrawnPayment[], passed: number): Figures {
  const decided = draws.filter(({ verdict }) => verdict !== null);
  const frauds = decided.filter(({ verdict }) => verdict === "fraudulent");
  const lapsed = draws.filter(({ verdict, isLapsed }) => verdict === null && isLapsed).length;
  const counts = {
    passed,
    drawn: draws.length,
    decided: decided.length,
    waiting: draws.length - decided.length - lapsed,
    lapsed,
    foundFraudulent: frauds.length,
  };
  if (passed === 0) return { ...counts, estimate: null, reason: "nothing_passed" };
  if (draws.length === 0) return { ...counts, estimate: null, reason: "nothing_drawn" };
  if (decided.length === 0) return { ...counts, estimate: null, reason: "nothing_decided" };
  const standsFor = standing(draws);
  const decidedPart = standing(decided) / standsFor;
  const chances = decided.map(({ probability }) => probability * decidedPart);
  const number = totalOf(
    decided.map(({ verdict }) => (verdict === "fraudulent" ? 1 : 0)),
    chances,
    decided.map(() => 1),
    { atLeast: frauds.length, atMost: Math.max(passed, frauds.length) },
  );
  const amounts = decided.map(({ amountBaseMinor }) => amountBaseMinor ?? 0);
  const value = totalOf(
    decided.map(({ verdict }, i) => (verdict === "fraudulent" ? (amounts[i] as number) : 0)),
    chances,
    amounts,
    {
      atLeast: frauds.reduce((sum, { amountBaseMinor }) => sum + (amountBaseMinor ?? 0), 0),
      atMost: Number.POSITIVE_INFINITY,
    },
  );
  const perThousand = (count: number) => Math.min(1000, (1000 * count) / standsFor);
  return {
    ...counts,
    reason: null,
    estimate: {
      fraudulent: number,
      // Over what the draws stand for and not over all that passed: right also where part of it could not be drawn.
      perThousand: {
        value: perThousand(number.value),
        low: perThousand(number.low),
        high: perThousand(number.high),
      },
      valueMinor: {
        value: Math.round(value.value),
        low: Math.round(value.low),
        high: Math.round(value.high),
      },
      unpriced: decided.filter(({ amountBaseMinor }) => amountBaseMinor === null).length,
      standsFor,
    },
  };
}

const standing = (draws: readonly DrawnPayment[]): number =>
  draws.reduce((sum, { probability }) => sum + 1 / probability, 0);

/** @param sizes what one more find could have counted, for each of the draws */
function totalOf(
  values: readonly number[],
  chances: readonly number[],
  sizes: readonly number[],
  { atLeast, atMost }: { atLeast: number; atMost: number },
) {
  const { total, variance } = horvitzThompson(values, chances);
  const largest = sizes.reduce((most, size, i) => Math.max(most, size / (chances[i] as number)), 0);
  if (largest === 0) return { value: total, low: total, high: total };
  const { low, high } = weightedSumInterval(total, variance, largest);
  return { value: total, low: Math.max(atLeast, low), high: Math.min(atMost, high) };
}
