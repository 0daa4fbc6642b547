import { AXIS_DECIBANS, axisPlace } from "../ui/axis-scale";

/** A tenth of a deciban: finer than a pixel on all but the widest screens. */
const BINS = AXIS_DECIBANS * 2 * 10;

export type RugTick = { place: number; height: number };

/**
 * The waiting cases as fine ticks on the axis, one for each tenth of a deciban that holds any. Height grows with the
 * logarithm of their number, so that a lone case is still seen beside a crowd; places and heights run from 0 to 1.
 */
export function rugTicks(evidenceDecibans: readonly number[]): RugTick[] {
  const counts = new Uint32Array(BINS + 1);
  let most = 0;
  for (const decibans of evidenceDecibans) {
    const bin = Math.round(axisPlace(decibans) * BINS);
    const count = (counts[bin] ?? 0) + 1;
    counts[bin] = count;
    if (count > most) most = count;
  }
  const ticks: RugTick[] = [];
  const top = Math.log1p(Math.max(most, 8));
  counts.forEach((count, bin) => {
    if (count > 0) ticks.push({ place: bin / BINS, height: 0.25 + (0.75 * Math.log1p(count)) / top });
  });
  return ticks;
}
