/** 97.5th percentile of the standard normal distribution, for intervals of 95 %. */
export const Z_95 = 1.959963984540054;

/** The series would cancel nothing but take long beyond here; the continued fraction is exact from here on. */
const SERIES_UP_TO = 2.5;
const MOST_TERMS = 300;

/**
 * Probability that a standard normal variable lies at least |z| away from 0.
 * erfc(|z|/√2): Abramowitz and Stegun 7.1.6 (series of positive terms) and 7.1.14 (continued fraction).
 */
export function twoSidedP(z: number): number {
  if (Number.isNaN(z)) throw new RangeError("z is not a number");
  const x = Math.abs(z) / Math.SQRT2;
  return x < SERIES_UP_TO ? 1 - erfBySeries(x) : erfcByFraction(x);
}

function erfBySeries(x: number): number {
  let term = x;
  let sum = x;
  for (let n = 1; n < MOST_TERMS && term > sum * 1e-17; n++) {
    term *= (2 * x * x) / (2 * n + 1);
    sum += term;
  }
  return (2 / Math.sqrt(Math.PI)) * Math.exp(-x * x) * sum;
}

function erfcByFraction(x: number): number {
  let below = x;
  for (let n = 100; n > 0; n--) below = x + n / 2 / below;
  return Math.exp(-x * x) / Math.sqrt(Math.PI) / below;
}
