import { gammaQuantile } from "./gamma";

/**
 * 95 % interval for a weighted sum of rare counts, by the gamma distribution: Fay and Feuer, Statistics in Medicine 16
 * (1997), 791–801. With weights 1 it is Garwood's exact Poisson interval (Biometrika 28, 1936). Unlike a
 * normal interval it holds for a handful of finds, and for none, where it reaches up to 3.69 times the largest weight.
 * @param total Σ of the weights of what was found
 * @param variance of `total`
 * @param largestWeight that one more find could have
 * @throws RangeError unless total, variance ≥ 0 and largestWeight > 0, all finite
 */
export function weightedSumInterval(
  total: number,
  variance: number,
  largestWeight: number,
): { low: number; high: number } {
  const fits = [total, variance, largestWeight].every(Number.isFinite);
  if (!(fits && total >= 0 && variance >= 0 && largestWeight > 0)) {
    throw new RangeError("A weighted sum needs total and variance ≥ 0 and a largest weight above 0");
  }
  const below = variance > 0 ? (variance / total) * gammaQuantile((total * total) / variance, 0.025) : total;
  const up = total + largestWeight;
  const upVariance = variance + largestWeight * largestWeight;
  return { low: below, high: (upVariance / up) * gammaQuantile((up * up) / upVariance, 0.975) };
}
