import { logitOf, natsToDecibans } from "../decibans";
import type { PolicyTerms, ScoreHistogram } from "./schema";

/** Cases a day that the terms would have made of the recent payments; null while there are too few of them. */
export type Projection = {
  reviewDecibans: number;
  holdDecibans: number;
  /** Review and hold together. */
  alertsPerDay: number;
  holdsPerDay: number;
};

/** With fewer scores a projection would be chance. */
const FEWEST_SCORES = 200;

export function project(
  terms: Pick<PolicyTerms, "reviewThreshold" | "holdThreshold">,
  recent: ScoreHistogram,
): Projection | null {
  if (recent.count < FEWEST_SCORES) return null;
  const wish = terms.reviewThreshold;
  const reviewDecibans =
    wish.kind === "fixed"
      ? natsToDecibans(logitOf(wish.probability))
      : lineFor(recent, wish.casesPerDay * recent.days);
  const holdDecibans = Math.max(natsToDecibans(logitOf(terms.holdThreshold)), reviewDecibans);
  return {
    reviewDecibans,
    holdDecibans,
    alertsPerDay: countAbove(recent, reviewDecibans) / recent.days,
    holdsPerDay: countAbove(recent, holdDecibans) / recent.days,
  };
}

/** Scores on or above a line; within a bin they count as spread evenly. */
export function countAbove({ bins, binDecibans }: ScoreHistogram, decibans: number): number {
  return bins.reduce((sum, { bin, count }) => {
    const share = bin + 1 - decibans / binDecibans;
    return sum + count * Math.max(0, Math.min(1, share));
  }, 0);
}

/** The line that leaves so many scores above it; the lowest bin's foot where there are not so many. */
export function lineFor({ bins, binDecibans }: ScoreHistogram, wished: number): number {
  const falling = bins.filter(({ count }) => count > 0).sort((a, b) => b.bin - a.bin);
  let above = 0;
  for (const { bin, count } of falling) {
    if (above + count >= wished) return (bin + 1 - (wished - above) / count) * binDecibans;
    above += count;
  }
  return (falling.at(-1)?.bin ?? 0) * binDecibans;
}
