import { populationStability } from "../quality/population-stability";

const BINS = 10;
const FEWEST = 50;

/**
 * How far probabilities have moved: population stability index over bins that hold a tenth each of those before. Half
 * a payment is added to every bin, so that an empty one counts as few rather than as infinitely far.
 * @returns null with too few of either
 */
export function scoreShift(recent: readonly number[], before: readonly number[]): number | null {
  if (recent.length < FEWEST || before.length < FEWEST) return null;
  const sorted = [...before].sort((a, b) => a - b);
  const edges = Array.from(
    { length: BINS - 1 },
    (_, i) => sorted[Math.floor(((i + 1) * sorted.length) / BINS)] as number,
  );
  const counted = (values: readonly number[]) => {
    const bins = new Array<number>(BINS).fill(0.5);
    for (const value of values) {
      const bin = edges.filter((edge) => value >= edge).length;
      bins[bin] = (bins[bin] as number) + 1;
    }
    return bins;
  };
  return populationStability(counted(before), counted(recent));
}
