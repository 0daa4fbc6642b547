import type { CurvePoint, ScorerFigures } from "@/lib/learning/learning-schema";

/** What the height of the chart stands for: all that was lost, or the difference from the scorer in use. */
export type Reckoning = "total" | "difference";

export type LossLine = {
  id: string;
  name: string;
  /** SVG dash pattern: lines are told apart without colour. */
  dash: string | undefined;
  look: "in_use" | "candidate" | "hindsight";
  /** Shares of the chart's width and height, from the left and the bottom. */
  points: readonly { x: number; y: number }[];
  /** In nats, at the right end. */
  last: number;
};

export type LossChart = {
  lines: readonly LossLine[];
  /** Heights with a rule across, in nats and as a share of the height. */
  ticks: readonly { value: number; y: number }[];
};

export const HINDSIGHT_ID = "hindsight";
const HINDSIGHT_DASH = "1 5";
const DASHES = ["9 5", "3 4", "12 4 3 4", "16 6", "5 3 2 3 2 3"];

export function lossChart(
  curve: readonly CurvePoint[],
  scorers: readonly ScorerFigures[],
  reckoning: Reckoning,
): LossChart {
  const inUse = scorers.find(({ role }) => role === "in_use");
  const heightOf = (point: CurvePoint, loss: number | null | undefined): number | null => {
    if (loss === null || loss === undefined) return null;
    if (reckoning === "total") return loss;
    const own = inUse && point.losses[inUse.id];
    return own === undefined ? null : loss - own;
  };
  const series = [
    ...scorers.map(({ id, name, role }, index) => ({
      id,
      name,
      dash: role === "in_use" ? undefined : DASHES[(index - 1) % DASHES.length],
      look: role === "in_use" ? ("in_use" as const) : ("candidate" as const),
      values: curve.map((point) => heightOf(point, point.losses[id])),
    })),
    {
      id: HINDSIGHT_ID,
      name: "Best fixed weights",
      dash: HINDSIGHT_DASH,
      look: "hindsight" as const,
      values: curve.map((point) => heightOf(point, point.hindsight)),
    },
  ].filter(({ values }) => values.some((value) => value !== null));
  const all = series.flatMap(({ values }) => values.filter((value) => value !== null));
  const { low, high, ticks } = heights(all);
  const place = (value: number) => (value - low) / (high - low);
  const first = curve[0]?.seq ?? 0;
  const length = Math.max(1, (curve.at(-1)?.seq ?? 0) - first);
  return {
    lines: series.map(({ values, ...line }) => ({
      ...line,
      points: curve.flatMap(({ seq }, index) => {
        const value = values[index];
        return value === null || value === undefined ? [] : [{ x: (seq - first) / length, y: place(value) }];
      }),
      last: values.findLast((value) => value !== null) ?? 0,
    })),
    ticks: ticks.map((value) => ({ value, y: place(value) })),
  };
}

/** The span from the least to the greatest and 0, with round values to rule it by. */
export function heights(values: readonly number[]): { low: number; high: number; ticks: number[] } {
  const least = Math.min(0, ...values);
  const most = Math.max(0, ...values);
  const step = roundStep((most - least) / 4 || 0.25);
  const from = Math.floor(least / step + 1e-9);
  const to = Math.max(from + 1, Math.ceil(most / step - 1e-9));
  const ticks = Array.from({ length: to - from + 1 }, (_, index) =>
    Number(((from + index) * step).toPrecision(12)),
  );
  return { low: ticks[0] ?? 0, high: ticks.at(-1) ?? 1, ticks };
}

/** The least of 1, 2 and 5 times a power of ten that is not below. */
function roundStep(wish: number): number {
  const power = 10 ** Math.floor(Math.log10(wish));
  const factor = [1, 2, 5, 10].find((each) => each * power >= wish * (1 - 1e-9)) ?? 10;
  return Number((factor * power).toPrecision(12));
}

/** Places for the names at the lines' ends, from the bottom, at least `gap` apart and all on the chart. */
export function spreadPlaces(wanted: readonly number[], gap: number): number[] {
  const apart = Math.min(gap, 1 / Math.max(1, wanted.length));
  const order = wanted.map((_, index) => index).sort((a, b) => (wanted[a] ?? 0) - (wanted[b] ?? 0));
  const places = [...wanted];
  let floor = apart / 2;
  for (const index of order) {
    places[index] = Math.max(places[index] ?? 0, floor);
    floor = (places[index] ?? 0) + apart;
  }
  let ceiling = 1 - apart / 2;
  for (const index of order.toReversed()) {
    places[index] = Math.min(places[index] ?? 0, ceiling);
    ceiling = (places[index] ?? 0) - apart;
  }
  return places;
}
