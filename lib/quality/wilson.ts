import { Z_95 } from "./normal";

/**
 * Score interval of Wilson (1927) for a share, at 95 %: method 3 of Newcombe, Statistics in Medicine 17 (1998).
 * Ends are clipped, so that 0 of n begins at exactly 0 and n of n ends at exactly 1.
 * @throws RangeError unless 0 ≤ count ≤ of and of > 0
 */
export function wilsonInterval(count: number, of: number): { low: number; high: number } {
  if (!(of > 0 && count >= 0 && count <= of)) throw new RangeError("A share needs 0 ≤ count ≤ of and of > 0");
  const p = count / of;
  const centre = p + (Z_95 * Z_95) / (2 * of);
  const half = Z_95 * Math.sqrt((p * (1 - p)) / of + (Z_95 * Z_95) / (4 * of * of));
  const scale = 1 + (Z_95 * Z_95) / of;
  return {
    low: count === 0 ? 0 : Math.max(0, (centre - half) / scale),
    high: count === of ? 1 : Math.min(1, (centre + half) / scale),
  };
}
