import { checkProbabilities } from "./labelled-scores";
import { type MeanEstimate, meanWithInterval } from "./mean-interval";

/**
 * Mean of −log of the probability given to what came, in nats (Good, Journal of the Royal Statistical Society B 14,
 * 1952). Infinite where something came that was given probability 0. 95 % interval: normal, over the payments.
 * @param labels 1 fraudulent, -1 legitimate
 * @returns null with fewer than two labels
 * @throws RangeError for unequal lengths, labels other than ±1 and p outside [0, 1]
 */
export function meanLogLoss(p: Float64Array, labels: Int8Array): MeanEstimate | null {
  checkProbabilities(p, labels);
  return meanWithInterval(p.map((one, i) => (labels[i] === 1 ? -Math.log(one) : -Math.log1p(-one))));
}
