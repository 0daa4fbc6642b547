import { twoSidedP, Z_95 } from "./normal";
import { covariance, placementsOf } from "./placements";

export type RocComparison = {
  /** First area minus second. */
  difference: number;
  covariance: number;
  standardError: number;
  low: number;
  high: number;
  z: number;
  /** Two-sided, under equal areas. */
  p: number;
};

/**
 * Two scorers on the same payments: the difference of their ROC areas, with the correlation taken into account.
 * DeLong, DeLong and Clarke-Pearson, Biometrics 44 (1988), 837–845.
 * @returns null with fewer than two frauds or two legitimate payments, and where the difference has no variance
 * @throws RangeError as `rocArea`
 */
export function compareRocAreas(
  first: Float64Array,
  second: Float64Array,
  labels: Int8Array,
): RocComparison | null {
  const [a, b] = [placementsOf(first, labels), placementsOf(second, labels)];
  if (!a || !b || Math.min(a.frauds.length, a.legitimate.length) < 2) return null;
  const between = (x: typeof a, y: typeof a) =>
    covariance(x.frauds, y.frauds) / x.frauds.length +
    covariance(x.legitimate, y.legitimate) / x.legitimate.length;
  const shared = between(a, b);
  const variance = between(a, a) + between(b, b) - 2 * shared;
  // The same order twice leaves rounding.
  if (!(variance > 1e-15)) return null;
  const standardError = Math.sqrt(variance);
  const difference = a.area - b.area;
  const z = difference / standardError;
  return {
    difference,
    covariance: shared,
    standardError,
    low: difference - Z_95 * standardError,
    high: difference + Z_95 * standardError,
    z,
    p: twoSidedP(z),
  };
}
