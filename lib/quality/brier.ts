import { checkProbabilities } from "./labelled-scores";
import { type MeanEstimate, meanWithInterval } from "./mean-interval";

/**
 * Mean squared error of the probability of fraud, Σ(p − y)²/n with y 1 or 0: today's one-class form. Brier (Monthly
 * Weather Review 78, 1950) summed over both classes, which is twice as much. 95 % interval: normal, over the payments.
 * @param labels 1 fraudulent, -1 legitimate
 * @returns null with fewer than two labels
 * @throws RangeError for unequal lengths, labels other than ±1 and p outside [0, 1]
 */
export function brier(p: Float64Array, labels: Int8Array): MeanEstimate | null {
  checkProbabilities(p, labels);
  return meanWithInterval(p.map((one, i) => (one - (labels[i] === 1 ? 1 : 0)) ** 2));
}
