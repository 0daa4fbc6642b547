import { Z_95 } from "./normal";
import { covariance, placementsOf } from "./placements";

export type RocArea = { area: number; standardError: number; low: number; high: number };

/**
 * Area under the ROC curve: the share of pairs of a fraud and a legitimate payment that the scores put in the right
 * order, a tie counting one half (Mann and Whitney 1947; Hanley and McNeil, Radiology 143, 1982). Standard error and
 * 95 % interval after DeLong, DeLong and Clarke-Pearson, Biometrics 44 (1988), clipped to [0, 1].
 *
 * Where every pair is in order (or none) that standard error is 0 and its interval a point. The interval is then that
 * of Clopper and Pearson (1934) for as many independent pairs as can be formed: min(m, n), all of them in order.
 * @param labels 1 fraudulent, -1 legitimate
 * @returns null with fewer than two frauds or two legitimate payments: there is no variance to estimate
 * @throws RangeError for unequal lengths, labels other than ±1 and scores that are not numbers
 */
export function rocArea(scores: Float64Array, labels: Int8Array): RocArea | null {
  const placements = placementsOf(scores, labels);
  if (!placements) return null;
  const { area, frauds, legitimate } = placements;
  const pairs = Math.min(frauds.length, legitimate.length);
  if (pairs < 2) return null;
  const standardError = Math.sqrt(
    covariance(frauds, frauds) / frauds.length + covariance(legitimate, legitimate) / legitimate.length,
  );
  if (area === 1) return { area, standardError, low: 0.025 ** (1 / pairs), high: 1 };
  if (area === 0) return { area, standardError, low: 0, high: 1 - 0.025 ** (1 / pairs) };
  return {
    area,
    standardError,
    low: Math.max(0, area - Z_95 * standardError),
    high: Math.min(1, area + Z_95 * standardError),
  };
}
