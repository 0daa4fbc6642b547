import type { SignalFigures } from "./own-schema";
import { ownToUnit } from "./signal-set";

/** A payment of the preview; null: the signal is not available for it. */
export type Measured = { externalId: string; value: number | null };
/** 1 fraudulent, -1 legitimate. */
export type LabelledValue = { label: number; value: number | null };

export const BINS = 20;
const SAMPLES = 5;
/** The most that a definition takes. */
const LARGEST_REACH = 1e15;

/**
 * What a signal looks like on recent payments, newest first, and on labelled ones.
 * @param scale null to take the suggested one
 */
export function figuresOf(
  measured: readonly Measured[],
  labelled: readonly LabelledValue[],
  scale: { middle: number; reach: number } | null,
): SignalFigures {
  const values = measured.flatMap(({ value }) => value ?? []).sort((a, b) => a - b);
  const suggested = suggestScale(values);
  const used = scale ?? suggested;
  return {
    payments: measured.length,
    available: values.length,
    values:
      values.length === 0
        ? null
        : { min: quantile(values, 0), median: quantile(values, 0.5), max: quantile(values, 1) },
    suggested,
    scale: used,
    histogram: used ? histogramOf(values.map((value) => ownToUnit(used, value))) : [],
    samples: measured.slice(0, SAMPLES).map(({ externalId, value }) => ({ externalId, value })),
    labelled: used ? compareLabelled(labelled, used) : null,
  };
}

/** By linear interpolation between the two nearest (type 7 of Hyndman and Fan, 1996). */
function quantile(sorted: readonly number[], share: number): number {
  const at = share * (sorted.length - 1);
  const low = sorted[Math.floor(at)] as number;
  const high = sorted[Math.ceil(at)] as number;
  return low + (high - low) * (at - Math.floor(at));
}

/** The median and the farther of q01 and q99; where these are all one value the farthest, and 1 where all are equal. */
function suggestScale(sorted: readonly number[]): { middle: number; reach: number } | null {
  if (sorted.length === 0) return null;
  const middle = quantile(sorted, 0.5);
  const farther = (share: number) =>
    Math.max(quantile(sorted, 1 - share) - middle, middle - quantile(sorted, share));
  const reach = farther(0.01) || farther(0) || 1;
  return { middle: rounded(middle), reach: rounded(Math.min(reach, LARGEST_REACH)) };
}

/** A scale is read and typed by people: four significant places are as good. */
const rounded = (value: number): number => Number(value.toPrecision(4));

function histogramOf(scaled: readonly number[]): number[] {
  const bins = new Array<number>(BINS).fill(0);
  for (const value of scaled) {
    const bin = Math.min(BINS - 1, Math.floor(((value + 1) / 2) * BINS));
    bins[bin] = (bins[bin] as number) + 1;
  }
  return bins;
}

function compareLabelled(
  labelled: readonly LabelledValue[],
  scale: { middle: number; reach: number },
): SignalFigures["labelled"] {
  const meanOf = (wanted: number) => {
    const scaled = labelled.flatMap(({ label, value }) =>
      label === wanted && value !== null ? ownToUnit(scale, value) : [],
    );
    return { count: scaled.length, mean: scaled.reduce((sum, value) => sum + value, 0) / scaled.length };
  };
  const [fraudulent, legitimate] = [meanOf(1), meanOf(-1)];
  if (fraudulent.count === 0 || legitimate.count === 0) return null;
  return { fraudulent, legitimate, difference: fraudulent.mean - legitimate.mean };
}
