import { describe, expect, test } from "vitest";
import { createScorer, logLoss, METHODS, probabilityOf } from "@/lib/scorer";
import { logistic } from "@/lib/scorer/logistic";
import { posteriorLogit, pulledLogit } from "@/lib/scorer/pull";
import { dot } from "@/lib/scorer/vector";
import { seededNumbers } from "./fixture";

describe("the logistic function and the log-loss", () => {
  test("keep full precision near 0 and far out", () => {
    // Values from 40-digit arithmetic.
    expect(logistic(1)).toBeCloseTo(0.7310585786300049, 15);
    expect(logistic(5)).toBeCloseTo(0.9933071490757153, 15);
    expect(logistic(-40) / 4.2483542552915889e-18).toBeCloseTo(1, 14);
    expect(logLoss(-5, 1)).toBeCloseTo(5.00671534848912, 13);
  });

  test("give a loss equal to the margin where e to its power overflows", () => {
    expect(logLoss(-710, 1)).toBe(710);
    expect(logLoss(-800, 1)).toBe(800);
    expect(logLoss(1000, -1)).toBe(1000);
    expect(logLoss(1000, 1)).toBe(0);
  });

  test("show a probability strictly between 0 and 1 at any log odds", () => {
    for (const z of [-1e300, -1000, -745.2, -37, 0, 37, 745.2, 1000, 1e300]) {
      expect(probabilityOf(z)).toBeGreaterThan(0);
      expect(probabilityOf(z)).toBeLessThan(1);
    }
  });
});

test("gradient takes the textbook's steps w + eta(y - p)x", () => {
  // The plain stochastic gradient rule, eta = 0.1 from w = 0 (textbook arithmetic, worked out by hand and in R).
  // Our step is 2B/(R√t), so a label's weight of 0.1·R√t/(2B) makes it 0.1.
  const bound = 4;
  const walk = (weights: number[]) => {
    const scorer = createScorer({
      method: "gradient",
      dimension: 2,
      weightBound: bound,
      featureBound: bound,
    });
    const labelled = [
      [Float64Array.of(1, 2), 1],
      [Float64Array.of(1, -1), -1],
      [Float64Array.of(1, 0.5), 1],
    ] as const;
    return labelled.map(([x, label], t) => {
      const probability = scorer.score(x).probability;
      scorer.learn(x, label, ((weights[t] as number) * 0.1 * Math.sqrt(t + 1)) / 2);
      return { probability, weights: scorer.weights() };
    });
  };
  const [first, second, third] = walk([1, 1, 1]);
  expect(first?.probability).toBe(0.5);
  expect(first?.weights[0]).toBeCloseTo(0.05, 12);
  expect(first?.weights[1]).toBeCloseTo(0.1, 12);
  expect(second?.probability).toBeCloseTo(0.487502603516, 12);
  expect(second?.weights[0]).toBeCloseTo(0.001249739648, 12);
  expect(second?.weights[1]).toBeCloseTo(0.148750260352, 12);
  expect(third?.probability).toBeCloseTo(0.518897212028, 12);
  expect(third?.weights[0]).toBeCloseTo(0.049360018446, 12);
  expect(third?.weights[1]).toBeCloseTo(0.17280539975, 11);
  // With the second case sampled at 1 in 4 and so counted four times, after all three:
  const [, , sampled] = walk([1, 4, 1]);
  expect(sampled?.weights[0]).toBeCloseTo(-0.095063528356, 12);
  expect(sampled?.weights[1]).toBeCloseTo(0.319969797931, 12);
});

describe("the two roots", () => {
  const next = seededNumbers(11);
  const draws = Array.from({ length: 20_000 }, () => ({
    target: (2 * next() - 1) * 10 ** (4 * next() - 1),
    strength: 10 ** (7 * next() - 3),
    label: next() < 0.5 ? 1 : -1,
  }));

  test("solve w + strength·tanh(w/2) = target to rounding, over seven orders of magnitude", () => {
    for (const { target, strength } of draws) {
      const w = pulledLogit(target, strength);
      const t = Math.tanh(w / 2);
      const error = (w + strength * t - target) / (1 + (strength / 2) * (1 - t * t));
      expect(Math.abs(error)).toBeLessThan(1e-13 * Math.max(1, Math.abs(w)));
      expect(Math.abs(w)).toBeLessThanOrEqual(Math.abs(target));
      expect(w * target).toBeGreaterThanOrEqual(0);
    }
  });

  test("solve w = target + strength·y·sigma(-yw) to rounding, over seven orders of magnitude", () => {
    for (const { target, strength, label } of draws) {
      const w = posteriorLogit(target, strength, label);
      const p = logistic(-label * w);
      const error = (w - target - label * strength * p) / (1 + strength * p * (1 - p));
      expect(Math.abs(error)).toBeLessThan(1e-12 * Math.max(1, Math.abs(w)));
    }
  });
});

describe.each(METHODS)("%s", (method) => {
  test("stays finite and within its bound where log odds reach a thousand", () => {
    const scorer = createScorer({ method, dimension: 3, weightBound: 100, featureBound: 10, offset: 0 });
    const next = seededNumbers(5);
    for (let n = 0; n < 400; n++) {
      const x = Float64Array.of(10 * next(), -10 * next(), 1);
      // Labels that first agree with the first signal, then flatly contradict it.
      const agrees = n < 200 ? 1 : -1;
      const { loss } = scorer.learn(x, (x[0] as number) > 5 === (agrees === 1) ? 1 : -1);
      expect(loss).toBeGreaterThanOrEqual(0);
      expect(Number.isFinite(loss)).toBe(true);
    }
    const length = Math.hypot(...scorer.weights());
    expect(Number.isFinite(length)).toBe(true);
    expect(length).toBeLessThanOrEqual(100 * (1 + 1e-12));
    const far = createScorer({ method, dimension: 1, offset: -1000 });
    const { loss } = far.learn(Float64Array.of(1), 1);
    expect(loss).toBeGreaterThan(900);
    expect(far.weights().every(Number.isFinite)).toBe(true);
  });
});

describe("a million labels on five signals", () => {
  test.each([
    { signals: "well spread", spread: 1, common: 0, tolerance: 1e-11 },
    { signals: "nearly collinear", spread: 1e-5, common: 1, tolerance: 1e-6 },
  ])("leave the leverage right and the weights finite where they are $signals", (drawn) => {
    const { spread, common, tolerance } = drawn;
    const dimension = 6;
    const scorer = createScorer({ dimension });
    const next = seededNumbers(21);
    const gathered = new Float64Array(dimension * dimension);
    for (let i = 0; i < dimension; i++) gathered[i * dimension + i] = 1;
    const draw = () => {
      const base = common * (2 * next() - 1);
      return Float64Array.from({ length: dimension }, (_, i) =>
        i === dimension - 1 ? 1 : base + spread * (2 * next() - 1),
      );
    };
    for (let n = 0; n < 1_000_000; n++) {
      const x = draw();
      const { step } = scorer.learn(x, next() < 0.1 ? 1 : -1);
      // The step's u is Px as it was, so x·u is the leverage before it, and h follows from what P lost.
      const h = step.shrink / (1 - step.shrink * dot(x, step.u));
      for (let i = 0; i < dimension; i++) {
        for (let j = 0; j < dimension; j++) {
          const at = i * dimension + j;
          gathered[at] = (gathered[at] as number) + h * (x[i] as number) * (x[j] as number);
        }
      }
    }
    expect(scorer.labels).toBe(1_000_000);
    expect(scorer.weights().every(Number.isFinite)).toBe(true);
    // s = x·A⁻¹x from the curvature itself, by elimination, against the P kept up to date label by label.
    let worst = 0;
    for (let n = 0; n < 50; n++) {
      const x = draw();
      worst = Math.max(worst, Math.abs(scorer.score(x).leverage / quadraticInverse(gathered, x) - 1));
    }
    expect(worst).toBeLessThan(tolerance);
  });
});

/** x·A⁻¹x by Gaussian elimination with pivoting. */
function quadraticInverse(a: Float64Array, x: Float64Array): number {
  const d = x.length;
  const rows = Array.from({ length: d }, (_, i) => [...a.slice(i * d, (i + 1) * d), x[i] as number]);
  for (let k = 0; k < d; k++) {
    const pivot = rows
      .slice(k)
      .reduce((best, row) => (Math.abs(row[k] as number) > Math.abs(best[k] as number) ? row : best));
    rows.splice(rows.indexOf(pivot), 1);
    rows.splice(k, 0, pivot);
    for (const row of rows.slice(k + 1)) {
      const factor = (row[k] as number) / (pivot[k] as number);
      for (let j = k; j <= d; j++) row[j] = (row[j] as number) - factor * (pivot[j] as number);
    }
  }
  const z = new Array<number>(d).fill(0);
  for (let i = d - 1; i >= 0; i--) {
    const row = rows[i] as number[];
    let sum = row[d] as number;
    for (let j = i + 1; j < d; j++) sum -= (row[j] as number) * (z[j] as number);
    z[i] = sum / (row[i] as number);
  }
  return z.reduce((total, value, i) => total + value * (x[i] as number), 0);
}
