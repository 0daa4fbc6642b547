import type { ScoreHistogram } from "@/lib/policy/schema";
import { AXIS_DECIBANS, axisPlace } from "../ui/axis-scale";

/** One bar of the chart: a deciban wide; place, width and height as shares of the whole. */
export type Bar = { from: number; count: number; place: number; width: number; height: number };

const BAR_DECIBANS = 1;

/** The histogram in whole decibans, what lies beyond the axis gathered in its end bars; empty bars left out. */
export function chartBars({ bins, binDecibans }: ScoreHistogram): Bar[] {
  const counts = new Map<number, number>();
  for (const { bin, count } of bins) {
    const from = Math.floor((bin * binDecibans) / BAR_DECIBANS) * BAR_DECIBANS;
    const shown = Math.max(-AXIS_DECIBANS, Math.min(AXIS_DECIBANS - BAR_DECIBANS, from));
    counts.set(shown, (counts.get(shown) ?? 0) + count);
  }
  const most = Math.max(1, ...counts.values());
  return [...counts]
    .sort(([a], [b]) => a - b)
    .map(([from, count]) => ({
      from,
      count,
      place: axisPlace(from),
      width: axisPlace(from + BAR_DECIBANS) - axisPlace(from),
      height: Math.sqrt(count / most),
    }));
}
