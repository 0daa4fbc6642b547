import { describe, expect, test } from "vitest";
import { heights, lossChart, spreadPlaces } from "@/components/learning/loss-lines";
import type { CurvePoint, ScorerFigures } from "@/lib/learning/learning-schema";

const IN_USE = "01900000-0000-7000-8000-000000000001";
const BESIDE = "01900000-0000-7000-8000-000000000002";

function scorer(id: string, role: ScorerFigures["role"]): ScorerFigures {
  const options = {
    weightBound: 16,
    featureBound: 4,
    marginBound: 6,
    regularization: 0.5,
    outcomeWeight: 0.5,
    forgetting: 1,
    offset: -3,
  };
  return {
    id,
    name: id.slice(-1),
    method: "improper",
    role,
    options,
    startedAt: "2026-11-03T08:00:00.000Z",
    startedSeq: 0,
    labels: 30,
    behind: 0,
    predicted: 30,
    livedPredicted: 30,
    cumulativeLoss: 9,
    meanLoss: 0.3,
    certificate: null,
    regret: null,
    brier: null,
    auc: null,
    averagePrecision: null,
    precisionAtCapacity: null,
    spiegelhalterZ: null,
    calibration: [],
  };
}

const scorers = [scorer(IN_USE, "in_use"), scorer(BESIDE, "candidate")];

function point(seq: number, losses: Record<string, number>, hindsight: number | null = null): CurvePoint {
  return { seq, at: "2026-11-03T09:00:00.000Z", losses, hindsight };
}

const curve = [
  point(10, { [IN_USE]: 4, [BESIDE]: 3 }),
  point(20, { [IN_USE]: 7, [BESIDE]: 6.5 }, 2),
  point(30, { [IN_USE]: 9 }),
];

describe("lines of the cumulative loss", () => {
  test("run from the left edge to the right by place in the log, over round heights from 0", () => {
    const { lines, ticks } = lossChart(curve, scorers, "total");
    expect(lines.map(({ id, last }) => [id, last])).toEqual([
      [IN_USE, 9],
      [BESIDE, 6.5],
      ["hindsight", 2],
    ]);
    expect(ticks.map(({ value }) => value)).toEqual([0, 5, 10]);
    expect(lines[0]?.points).toEqual([
      { x: 0, y: 0.4 },
      { x: 0.5, y: 0.7 },
      { x: 1, y: 0.9 },
    ]);
  });

  test("end where a scorer has not come further, and are drawn where something is known", () => {
    const { lines } = lossChart(curve, scorers, "total");
    expect(lines[1]?.points.map(({ x }) => x)).toEqual([0, 0.5]);
    expect(lines[2]?.points).toEqual([{ x: 0.5, y: 0.2 }]);
    expect(lossChart([curve[0] as CurvePoint], scorers, "total").lines.map(({ id }) => id)).not.toContain(
      "hindsight",
    );
  });

  test("as differences lie beside a scorer in use that stays at 0", () => {
    const { lines } = lossChart(curve, scorers, "difference");
    expect(lines.map(({ last }) => last)).toEqual([0, -0.5, -5]);
    expect(new Set(lines[0]?.points.map(({ y }) => y)).size).toBe(1);
  });

  test("are told apart without colour: no two have the same strokes", () => {
    const six = [IN_USE, ..."abcde"].map((id, index) => scorer(id, index === 0 ? "in_use" : "candidate"));
    const losses = Object.fromEntries(six.map(({ id }, index) => [id, index + 1]));
    const { lines } = lossChart([point(1, losses, 0.5), point(2, losses, 0.7)], six, "total");
    expect(new Set(lines.map(({ dash }) => dash)).size).toBe(7);
  });
});

describe("heights", () => {
  test.each([
    [
      [276.4, 12],
      [0, 100, 200, 300],
    ],
    [
      [-110.9, 21.8],
      [-150, -100, -50, 0, 50],
    ],
    [[0.031], [0, 0.01, 0.02, 0.03, 0.04]],
    [[], [0, 0.5]],
  ])("of %j are ruled at %j", (values, ticks) => {
    const ruled = heights(values);
    expect(ruled.low).toBeLessThanOrEqual(Math.min(0, ...values));
    expect(ruled.high).toBeGreaterThanOrEqual(Math.max(0, ...values));
    expect(ruled.ticks).toEqual(ticks);
  });
});

describe("names at the ends of lines", () => {
  test("stay where there is room", () => {
    expect(spreadPlaces([0.9, 0.2], 0.1)).toEqual([0.9, 0.2]);
  });

  test("stand at least the gap apart, in the order of their lines, and all on the chart", () => {
    const places = spreadPlaces([0.98, 0.97, 0.96, 0.01], 0.12);
    const [first = 0, second = 0, third = 0, last = 0] = places;
    expect(first - second).toBeGreaterThanOrEqual(0.12 - 1e-9);
    expect(second - third).toBeGreaterThanOrEqual(0.12 - 1e-9);
    expect(first).toBeLessThanOrEqual(0.94 + 1e-9);
    expect(last).toBeGreaterThanOrEqual(0.06 - 1e-9);
  });
});
