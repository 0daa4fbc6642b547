import { checkLabelled } from "./labelled-scores";

/** Each fraud's share of legitimate payments below it, each legitimate payment's share of frauds above it. */
export type Placements = { area: number; frauds: Float64Array; legitimate: Float64Array };

/**
 * Structural components of the Mann–Whitney statistic, a tie counting one half, in the order of the labels:
 * DeLong, DeLong and Clarke-Pearson, Biometrics 44 (1988), by midranks as Sun and Xu, IEEE Signal Processing
 * Letters 21 (2014). O(n log n). Null without a fraud or without a legitimate payment.
 */
export function placementsOf(scores: ArrayLike<number>, labels: ArrayLike<number>): Placements | null {
  checkLabelled(scores, labels);
  const frauds: number[] = [];
  const legitimate: number[] = [];
  for (let i = 0; i < labels.length; i++) {
    (labels[i] === 1 ? frauds : legitimate).push(scores[i] as number);
  }
  if (frauds.length === 0 || legitimate.length === 0) return null;
  const lower = Float64Array.from(legitimate).sort();
  const upper = Float64Array.from(frauds).sort();
  const above = Float64Array.from(frauds, (score) => midrank(lower, score) / lower.length);
  return {
    area: above.reduce((sum, share) => sum + share, 0) / above.length,
    frauds: above,
    legitimate: Float64Array.from(legitimate, (score) => 1 - midrank(upper, score) / upper.length),
  };
}

/** How many of the sorted values lie below, those equal counting one half. */
function midrank(sorted: Float64Array, value: number): number {
  return (firstNotBelow(sorted, value, false) + firstNotBelow(sorted, value, true)) / 2;
}

function firstNotBelow(sorted: Float64Array, value: number, pastEqual: boolean): number {
  let low = 0;
  let high = sorted.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    const there = sorted[middle] as number;
    if (there < value || (pastEqual && there === value)) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** Sample covariance, with n − 1. */
export function covariance(a: Float64Array, b: Float64Array): number {
  const mean = (values: Float64Array) => values.reduce((sum, value) => sum + value, 0) / values.length;
  const [meanA, meanB] = [mean(a), mean(b)];
  return a.reduce((sum, value, i) => sum + (value - meanA) * ((b[i] as number) - meanB), 0) / (a.length - 1);
}
