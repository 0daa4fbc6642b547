import { Z_95 } from "./normal";

export type SampledTotal = {
  total: number;
  /** Unbiased estimate of the variance of `total`. */
  variance: number;
  standardError: number;
  /** 95 %, normal: right for totals that many members carry. */
  low: number;
  high: number;
};

/**
 * Total over a population, from members drawn with known probabilities π independently of one another (Poisson
 * sampling): Σ y/π, Horvitz and Thompson, Journal of the American Statistical Association 47 (1952). Variance
 * Σ (1 − π)·(y/π)²: Särndal, Swensson and Wretman, Model Assisted Survey Sampling (1992), section 3.5.
 * @param values y of each member drawn
 * @param probabilities π of each member drawn, in (0, 1]
 * @throws RangeError for unequal lengths, values that are not finite and π outside (0, 1]
 */
export function horvitzThompson(values: ArrayLike<number>, probabilities: ArrayLike<number>): SampledTotal {
  if (values.length !== probabilities.length) throw new RangeError("One probability per value is needed");
  let total = 0;
  let variance = 0;
  for (let i = 0; i < values.length; i++) {
    const pi = probabilities[i] as number;
    const y = values[i] as number;
    if (!(pi > 0 && pi <= 1)) throw new RangeError(`Probability ${i} is not in (0, 1]`);
    if (!Number.isFinite(y)) throw new RangeError(`Value ${i} is not finite`);
    total += y / pi;
    variance += (1 - pi) * (y / pi) ** 2;
  }
  const standardError = Math.sqrt(variance);
  return {
    total,
    variance,
    standardError,
    low: total - Z_95 * standardError,
    high: total + Z_95 * standardError,
  };
}
