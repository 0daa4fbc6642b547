/** ln Γ(a) for a > 0: Stirling's series (Abramowitz and Stegun 6.1.41) after raising a to where it is exact. */
export function logGamma(a: number): number {
  let product = 1;
  let x = a;
  for (; x < 12; x += 1) product *= x;
  const inverse = 1 / (x * x);
  const series =
    (1 / 12 - inverse * (1 / 360 - inverse * (1 / 1260 - inverse * (1 / 1680 - inverse / 1188)))) / x;
  return (x - 0.5) * Math.log(x) - x + 0.5 * Math.log(2 * Math.PI) + series - Math.log(product);
}

const MOST_TERMS = 100_000;

/** Regularised lower incomplete gamma function P(a, x), a > 0, x ≥ 0: Abramowitz and Stegun 6.5.29 and 6.5.31. */
export function gammaShare(a: number, x: number): number {
  if (x <= 0) return 0;
  const scale = Math.exp(a * Math.log(x) - x - logGamma(a));
  if (x < a + 1) {
    let term = 1 / a;
    let sum = term;
    for (let n = 1; n < MOST_TERMS && term > sum * 1e-17; n++) {
      term *= x / (a + n);
      sum += term;
    }
    return scale * sum;
  }
  // The continued fraction by Lentz's method.
  let b = x + 1 - a;
  let c = 1e300;
  let d = 1 / b;
  let fraction = d;
  for (let n = 1; n < MOST_TERMS; n++) {
    const factor = -n * (n - a);
    b += 2;
    d = 1 / (factor * d + b);
    c = b + factor / c;
    fraction *= c * d;
    if (Math.abs(c * d - 1) < 1e-16) break;
  }
  return 1 - scale * fraction;
}

/** x with P(a, x) = share, by bisection to the last bit that matters; a > 0, share in (0, 1). */
export function gammaQuantile(a: number, share: number): number {
  if (!(a > 0 && share > 0 && share < 1)) throw new RangeError("A quantile needs a > 0 and 0 < share < 1");
  let low = 0;
  let high = a + 1;
  while (gammaShare(a, high) < share) high *= 2;
  for (let round = 0; round < 200 && high - low > high * 1e-13; round++) {
    const middle = (low + high) / 2;
    if (gammaShare(a, middle) < share) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
