import { wilsonInterval } from "./wilson";

/**
 * Difference of two independent shares, first minus second, with the hybrid score interval at 95 %: method 10 of
 * Newcombe, Statistics in Medicine 17 (1998), 873–890.
 * @throws RangeError unless 0 ≤ count ≤ of and of > 0 for both
 */
export function differenceOfShares(
  first: { count: number; of: number },
  second: { count: number; of: number },
): { difference: number; low: number; high: number } {
  const [a, b] = [wilsonInterval(first.count, first.of), wilsonInterval(second.count, second.of)];
  const [p, q] = [first.count / first.of, second.count / second.of];
  return {
    difference: p - q,
    low: p - q - Math.hypot(p - a.low, b.high - q),
    high: p - q + Math.hypot(a.high - p, q - b.low),
  };
}
