import { checkLabelled } from "./labelled-scores";
import { wilsonInterval } from "./wilson";

export type PrecisionAtTop = {
  value: number;
  low: number;
  high: number;
  /** Payments in the tops of all days. */
  n: number;
  positives: number;
};

/**
 * Share of fraud among each day's `perDay` highest scores, over all days together, with Wilson's interval at 95 %.
 * A day with fewer payments counts with all of them. Of equal scores at the cut, the earlier in the list are taken.
 * @param labels 1 fraudulent, -1 legitimate
 * @param days the day of each payment, by any number that tells days apart
 * @returns null without a payment
 * @throws RangeError for unequal lengths, labels other than ±1, scores that are not numbers and perDay below 1
 */
export function precisionAtTop(
  scores: Float64Array,
  labels: Int8Array,
  days: ArrayLike<number>,
  perDay: number,
): PrecisionAtTop | null {
  checkLabelled(scores, labels);
  if (days.length !== labels.length) throw new RangeError(`${days.length} days but ${labels.length} labels`);
  if (!(Number.isInteger(perDay) && perDay >= 1))
    throw new RangeError("A day's top needs at least one payment");
  const byDay = new Map<number, number[]>();
  for (let i = 0; i < labels.length; i++) {
    const day = days[i] as number;
    const rows = byDay.get(day);
    if (rows) rows.push(i);
    else byDay.set(day, [i]);
  }
  let n = 0;
  let positives = 0;
  for (const rows of byDay.values()) {
    // A stable sort keeps equal scores in the order of the list.
    const top = rows.sort((a, b) => (scores[b] as number) - (scores[a] as number)).slice(0, perDay);
    n += top.length;
    positives += top.filter((i) => labels[i] === 1).length;
  }
  return n === 0 ? null : { value: positives / n, ...wilsonInterval(positives, n), n, positives };
}
