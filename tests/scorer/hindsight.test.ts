import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { bestInHindsight, DimensionError, LabelError, NotFiniteError, OptionsError } from "@/lib/scorer";
import { drawLabelled, readSet, readTable } from "./fixture";

/** So large that the fit is the ordinary maximum-likelihood one. */
const UNBOUNDED = 1e6;

function expectNear(weights: Float64Array, expected: readonly number[], tolerance = 1e-8): void {
  expect(weights).toHaveLength(expected.length);
  expected.forEach((value, i) => {
    expect(Math.abs((weights[i] as number) - value)).toBeLessThan(tolerance);
  });
}

describe("on published data the unbounded fit is the maximum-likelihood one", () => {
  // Each value: R 4.2 glm(family = binomial), run to convergence, and statsmodels 0.13, agreeing to the digits shown.

  test("birth weight (Hosmer and Lemeshow 1989): eight terms and a log-likelihood of -100.71347560", () => {
    const rows = readTable("birth-weight.csv");
    const vectors = rows.map((r) =>
      Float64Array.from([
        1,
        r.age,
        r.lwt,
        r.race === 2 ? 1 : 0,
        r.race === 3 ? 1 : 0,
        r.smoke,
        r.ptl,
        r.ht,
        r.ui,
      ] as number[]),
    );
    const labels = rows.map((r) => (r.low === 1 ? 1 : -1));
    const { weights, loss } = bestInHindsight(vectors, labels, UNBOUNDED);
    expectNear(
      weights,
      [
        0.46440328, -0.02706978, -0.01518256, 1.26321938, 0.86163511, 0.92334916, 0.54175512, 1.83369561,
        0.7585965,
      ],
    );
    expect(loss).toBeCloseTo(100.7134756, 7);
  });

  test("birth weight, the two textbook models: -111.286453 and -111.629545", () => {
    const rows = readTable("birth-weight.csv");
    const labels = rows.map((r) => (r.low === 1 ? 1 : -1));
    const fitted = (columns: (r: Record<string, number>) => (number | undefined)[]) =>
      bestInHindsight(
        rows.map((r) => Float64Array.from(columns(r) as number[])),
        labels,
        UNBOUNDED,
      );
    const race = (r: Record<string, number>) => [r.race === 2 ? 1 : 0, r.race === 3 ? 1 : 0];
    const larger = fitted((r) => [1, r.age, r.lwt, ...race(r), r.ftv]);
    expectNear(larger.weights, [1.29536575, -0.02382297, -0.01424461, 1.00389782, 0.43310843, -0.04930832]);
    expect(larger.loss).toBeCloseTo(111.286453, 6);
    const smaller = fitted((r) => [1, r.lwt, ...race(r)]);
    expectNear(smaller.weights, [0.80575347, -0.0152231, 1.08106619, 0.48060326]);
    expect(smaller.loss).toBeCloseTo(111.629545, 6);
  });

  test("gearbox by weight of 32 cars (R's mtcars): 12.04036973 - 4.02396996·wt", () => {
    const cars =
      "2.62,1 2.875,1 2.32,1 3.215,0 3.44,0 3.46,0 3.57,0 3.19,0 3.15,0 3.44,0 3.44,0 4.07,0 3.73,0 3.78,0 5.25,0 5.424,0 " +
      "5.345,0 2.2,1 1.615,1 1.835,1 2.465,0 3.52,0 3.435,0 3.84,0 3.845,0 1.935,1 2.14,1 1.513,1 3.17,1 2.77,1 3.57,1 2.78,1";
    const rows = cars.split(" ").map((car) => car.split(",").map(Number));
    const { weights, loss } = bestInHindsight(
      rows.map((row) => Float64Array.of(1, row[0] as number)),
      rows.map((row) => (row[1] === 1 ? 1 : -1)),
      UNBOUNDED,
    );
    expectNear(weights, [12.04036973, -4.02396996]);
    expect(loss).toBeCloseTo(9.5880424, 7);
    const margin = (weights[0] as number) + 3 * (weights[1] as number);
    expect(1 / (1 + Math.exp(-margin))).toBeCloseTo(0.49211561, 8);
  });

  test("grouped data (R's infert, 248 women in 8 cells): -1.70786007, 1.19720504, 0.41812940", () => {
    const cells = [
      [0, 0, 60, 7],
      [0, 1, 33, 12],
      [0, 2, 20, 9],
      [1, 0, 25, 22],
      [1, 1, 11, 5],
      [1, 2, 4, 4],
      [2, 0, 11, 18],
      [2, 1, 1, 6],
    ] as const;
    const vectors: Float64Array[] = [];
    const labels: (1 | -1)[] = [];
    for (const [spontaneous, induced, controls, positives] of cells) {
      for (let n = 0; n < controls + positives; n++) {
        vectors.push(Float64Array.of(1, spontaneous, induced));
        labels.push(n < controls ? -1 : 1);
      }
    }
    const { weights, loss } = bestInHindsight(vectors, labels, UNBOUNDED);
    expectNear(weights, [-1.70786007, 1.19720504, 0.4181294]);
    expect(loss).toBeCloseTo(139.80598942, 7);
  });

  test("Pima diabetes: 360.78796 within B = 4; half of R's deviance, 358.854926, within B = 8", () => {
    const { vectors, labels } = readSet("pima");
    const tight = bestInHindsight(vectors, labels, 4);
    expect(tight.loss).toBeCloseTo(360.78796, 5);
    expect(Math.hypot(...tight.weights)).toBeCloseTo(4, 12);
    const wide = bestInHindsight(vectors, labels, 8);
    expect(wide.loss).toBeCloseTo(358.854926, 6);
    expect(Math.hypot(...wide.weights)).toBeLessThan(8);
  });
});

test("the gradient at the solution is null inside the ball, and on it points straight inward", () => {
  fc.assert(
    fc.property(
      fc.integer({ min: 1, max: 6 }),
      fc.integer(),
      fc.double({ min: 0.05, max: 20, noNaN: true }),
      (d, seed, bound) => {
        const { vectors, labels } = drawLabelled(40, d, seed);
        const { weights } = bestInHindsight(vectors, labels, bound, 0.3);
        const gradient = new Float64Array(d);
        vectors.forEach((x, n) => {
          const y = labels[n] as number;
          const margin = 0.3 + x.reduce((sum, value, i) => sum + value * (weights[i] as number), 0);
          const pull = y / (1 + Math.exp(y * margin));
          for (let i = 0; i < d; i++) gradient[i] = (gradient[i] as number) - pull * (x[i] as number);
        });
        const length = Math.hypot(...weights);
        expect(length).toBeLessThanOrEqual(bound * (1 + 1e-12));
        const along = gradient.reduce((sum, value, i) => sum + value * (weights[i] as number), 0);
        const multiplier = length > bound * (1 - 1e-9) ? Math.max(0, -along / length ** 2) : 0;
        for (let i = 0; i < d; i++) {
          expect(Math.abs((gradient[i] as number) + multiplier * (weights[i] as number))).toBeLessThan(1e-6);
        }
      },
    ),
    { seed: 7, numRuns: 150 },
  );
});

test("separable labels and collinear signals end on the ball instead of running away", () => {
  const vectors = [-2, -1, 1, 2].map((value) => Float64Array.of(value, value));
  const { weights, loss } = bestInHindsight(vectors, [-1, -1, 1, 1], 5);
  expect(weights[0]).toBeCloseTo(5 / Math.SQRT2, 9);
  expect(weights[1]).toBeCloseTo(5 / Math.SQRT2, 9);
  const margin = 10 / Math.SQRT2;
  expect(loss).toBeCloseTo(2 * Math.log1p(Math.exp(-margin)) + 2 * Math.log1p(Math.exp(-2 * margin)), 12);
});

test("bad input is refused by name", () => {
  const x = Float64Array.of(1, 2);
  expect(() => bestInHindsight([], [], 1)).toThrow(DimensionError);
  expect(() => bestInHindsight([x, Float64Array.of(1)], [1, 1], 1)).toThrow(DimensionError);
  expect(() => bestInHindsight([x], [1, -1], 1)).toThrow(DimensionError);
  expect(() => bestInHindsight([Float64Array.of(1, Number.NaN)], [1], 1)).toThrow(NotFiniteError);
  expect(() => bestInHindsight([x], [0 as 1], 1)).toThrow(LabelError);
  expect(() => bestInHindsight([x], [1], 0)).toThrow(OptionsError);
  expect(() => bestInHindsight([x], [1], 1, Number.POSITIVE_INFINITY)).toThrow(OptionsError);
});
