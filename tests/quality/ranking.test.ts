import path from "node:path";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { averagePrecision } from "@/lib/quality/average-precision";
import { averagePrecisionInterval } from "@/lib/quality/bootstrap-precision";
import { precisionAtTop } from "@/lib/quality/precision-at-top";
import { rocArea } from "@/lib/quality/roc-area";
import { compareRocAreas } from "@/lib/quality/roc-comparison";
import { readTable, seededNumbers } from "../scorer/fixture";
import { judged } from "./judged";

const PATIENTS = readTable("subarachnoid.csv", path.join(import.meta.dirname, "../fixtures/quality"));

/** Hanley and McNeil, Radiology 143 (1982): 109 images rated 1 to 5, 51 of them abnormal. Counts from memory. */
const IMAGES = (() => {
  const normal = [33, 6, 6, 11, 2];
  const abnormal = [3, 2, 2, 11, 33];
  const rated = (counts: number[], outcome: number) =>
    counts.flatMap((count, i) => Array.from({ length: count }, () => [outcome, i + 1] as const));
  const rows = [...rated(normal, 0), ...rated(abnormal, 1)];
  return judged(
    rows.map((row) => row[0]),
    rows.map((row) => row[1]),
  );
})();

describe("the ROC area", () => {
  test("of Hanley and McNeil's images is their published 0.893", () => {
    // DeLong's standard error and interval: R, pROC 1.18.0.
    const area = rocArea(IMAGES.scores, IMAGES.labels);
    expect(area?.area).toBeCloseTo(2642 / 2958, 12);
    expect(area?.standardError).toBeCloseTo(0.030724, 6);
    expect(area?.low).toBeCloseTo(0.832952, 6);
    expect(area?.high).toBeCloseTo(0.95339, 6);
  });

  test("of four payments, scikit-learn's documented example, is 0.75", () => {
    const { scores, labels } = judged([0, 0, 1, 1], [0.1, 0.4, 0.35, 0.8]);
    const area = rocArea(scores, labels);
    expect(area?.area).toBe(0.75);
    expect((area?.standardError as number) ** 2).toBeCloseTo(0.125, 12);
    expect(averagePrecision(scores, labels)).toBeCloseTo(0.833333, 6);
  });

  test.each([
    // R, pROC 1.18.0, on its data set aSAH (Turck and others, 2010).
    ["s100b", 0.731369, 0.051659, 0.630118, 0.832619],
    ["wfns", 0.823679, 0.038339, 0.748535, 0.898823],
    ["ndka", 0.611958, 0.056487, 0.501245, 0.722671],
  ])("of %s in 113 patients is pROC's", (column, area, standardError, low, high) => {
    const { scores, labels } = judged(
      PATIENTS.map((row) => row.outcome as number),
      PATIENTS.map((row) => row[column] as number),
    );
    const found = rocArea(scores, labels);
    expect(found?.area).toBeCloseTo(area, 6);
    expect(found?.standardError).toBeCloseTo(standardError, 6);
    expect(found?.low).toBeCloseTo(low, 6);
    expect(found?.high).toBeCloseTo(high, 6);
  });

  test("with every pair in order has an interval that is no point", () => {
    // Clopper and Pearson (1934) for 20 of 20: 0.831567 (0/20 is printed as 0 to 0.168433).
    const { scores, labels } = judged(
      Array.from({ length: 50 }, (_, i) => (i < 20 ? 1 : 0)),
      Array.from({ length: 50 }, (_, i) => -i),
    );
    const { low = 0, ...all } = rocArea(scores, labels) ?? {};
    expect(all).toEqual({ area: 1, standardError: 0, high: 1 });
    expect(low).toBeCloseTo(0.831567, 6);
    const turned = rocArea(
      scores.map((score) => -score),
      labels,
    );
    expect(turned?.low).toBe(0);
    expect(turned?.high).toBeCloseTo(0.168433, 6);
  });

  test("is not defined with fewer than two of a kind", () => {
    for (const outcomes of [[], [1], [1, 1, 1], [0, 0, 0], [1, 0, 0]]) {
      const { scores, labels } = judged(
        outcomes,
        outcomes.map((_, i) => i),
      );
      expect(rocArea(scores, labels)).toBeNull();
    }
  });

  test("is the share of ordered pairs, counted one by one", () => {
    const pair = fc.tuple(fc.integer({ min: 0, max: 1 }), fc.integer({ min: 0, max: 6 }));
    fc.assert(
      fc.property(fc.array(pair, { minLength: 4, maxLength: 40 }), (rows) => {
        const frauds = rows.filter(([outcome]) => outcome === 1).map(([, score]) => score);
        const others = rows.filter(([outcome]) => outcome === 0).map(([, score]) => score);
        fc.pre(frauds.length > 1 && others.length > 1);
        let pairs = 0;
        for (const a of frauds) for (const b of others) pairs += a > b ? 1 : a === b ? 0.5 : 0;
        const { scores, labels } = judged(
          rows.map((row) => row[0]),
          rows.map((row) => row[1]),
        );
        expect(rocArea(scores, labels)?.area).toBeCloseTo(pairs / frauds.length / others.length, 12);
      }),
      { seed: 3 },
    );
  });

  test("refuses what is no score or no label", () => {
    expect(() => rocArea(Float64Array.of(1), Int8Array.of(1, -1))).toThrow(/1 scores but 2 labels/);
    expect(() => rocArea(Float64Array.of(1, 2), Int8Array.of(1, 0))).toThrow(/Label 1/);
    expect(() => rocArea(Float64Array.of(1, Number.NaN), Int8Array.of(1, -1))).toThrow(/Score 1/);
  });
});

describe("two areas on the same payments", () => {
  const of = (column: string) =>
    judged(
      PATIENTS.map((row) => row.outcome as number),
      PATIENTS.map((row) => row[column] as number),
    );

  test("are compared as in pROC", () => {
    // R, pROC 1.18.0, roc.test(method = "delong", paired = TRUE).
    const { labels } = of("s100b");
    const close = compareRocAreas(of("s100b").scores, of("wfns").scores, labels);
    expect(close?.covariance).toBeCloseTo(0.00119615567, 10);
    expect(close?.z).toBeCloseTo(-2.208984, 6);
    expect(close?.p).toBeCloseTo(0.027176, 6);
    const apart = compareRocAreas(of("s100b").scores, of("ndka").scores, labels);
    expect(apart?.z).toBeCloseTo(1.39077, 6);
    expect(apart?.p).toBeCloseTo(0.164295, 6);
  });

  test("do not differ where the order is the same", () => {
    const { scores, labels } = of("s100b");
    expect(
      compareRocAreas(
        scores,
        scores.map((score) => 3 * score + 1),
        labels,
      ),
    ).toBeNull();
  });
});

describe("average precision", () => {
  test.each([
    // Croft, Metzler and Strohman, Search Engines (2009), section 8.4; attribution from memory.
    [[1, 3, 6, 9, 10], 0.622222],
    [[2, 5, 7], 0.442857],
  ])("with what counts at ranks %j of ten is %f", (ranks, expected) => {
    const { scores, labels } = judged(
      Array.from({ length: 10 }, (_, i) => (ranks.includes(i + 1) ? 1 : 0)),
      Array.from({ length: 10 }, (_, i) => -i),
    );
    expect(averagePrecision(scores, labels)).toBeCloseTo(expected, 6);
  });

  test("of equal scores is the share of fraud, whatever their order", () => {
    expect(averagePrecision(new Float64Array(4).fill(0.3), Int8Array.of(1, -1, -1, 1))).toBe(0.5);
    expect(averagePrecision(new Float64Array(4).fill(0.3), Int8Array.of(-1, -1, 1, 1))).toBe(0.5);
  });

  test("of the images is scikit-learn's 0.857640", () => {
    expect(averagePrecision(IMAGES.scores, IMAGES.labels)).toBeCloseTo(0.85764, 6);
  });

  test("is not defined without fraud", () => {
    expect(averagePrecision(new Float64Array(0), new Int8Array(0))).toBeNull();
    expect(averagePrecision(Float64Array.of(1, 2), Int8Array.of(-1, -1))).toBeNull();
  });
});

describe("the bootstrap interval of average precision", () => {
  /** Payments with normal scores, frauds one and a half higher. */
  function drawn(count: number, share: number, seed: number) {
    const unit = seededNumbers(seed);
    const normal = () => Math.sqrt(-2 * Math.log(1 - unit())) * Math.cos(2 * Math.PI * unit());
    const outcomes = Array.from({ length: count }, () => (unit() < share ? 1 : 0));
    return judged(
      outcomes,
      outcomes.map((outcome) => normal() + 1.5 * outcome),
    );
  }

  test("is the same for the same seed and another for another", () => {
    const { scores, labels } = drawn(300, 0.2, 1);
    const once = averagePrecisionInterval(scores, labels, 7);
    expect(averagePrecisionInterval(scores, labels, 7)).toEqual(once);
    expect(averagePrecisionInterval(scores, labels, 8)).not.toEqual(once);
    expect(once?.draws).toBe(500);
  });

  test("holds the true value in about 95 of 100 samples", () => {
    const whole = drawn(100_000, 0.2, 2);
    const truth = averagePrecision(whole.scores, whole.labels) as number;
    let held = 0;
    for (let sample = 0; sample < 200; sample++) {
      const { scores, labels } = drawn(250, 0.2, 100 + sample);
      const { low, high } = averagePrecisionInterval(scores, labels, sample) ?? { low: 1, high: 0 };
      if (low <= truth && truth <= high) held += 1;
    }
    // 95 % of 200 less three standard deviations, and less the loss that the percentile interval is known to have.
    expect(held).toBeGreaterThanOrEqual(178);
    expect(held).toBeLessThanOrEqual(199);
  });

  test("joined to bound its cost is what it would be unjoined", () => {
    const { scores, labels } = drawn(20_000, 0.02, 3);
    const value = averagePrecision(scores, labels) as number;
    const { low, high } = averagePrecisionInterval(scores, labels) ?? { low: 1, high: 0 };
    expect(low).toBeLessThan(value);
    expect(high).toBeGreaterThan(value);
    // A plain bootstrap of the rows themselves, 60 draws, has a standard deviation of the same size.
    const unit = seededNumbers(9);
    const values = Array.from({ length: 60 }, () => {
      const rows = Array.from({ length: scores.length }, () => Math.floor(unit() * scores.length));
      return averagePrecision(
        Float64Array.from(rows, (row) => scores[row] as number),
        Int8Array.from(rows, (row) => labels[row] as number),
      ) as number;
    });
    const mean = values.reduce((sum, one) => sum + one, 0) / values.length;
    const deviation = Math.sqrt(values.reduce((sum, one) => sum + (one - mean) ** 2, 0) / 59);
    expect((high - low) / (2 * 1.96 * deviation)).toBeGreaterThan(0.7);
    expect((high - low) / (2 * 1.96 * deviation)).toBeLessThan(1.4);
  });

  test("is not defined with a single fraud or nothing else", () => {
    expect(averagePrecisionInterval(Float64Array.of(1, 2), Int8Array.of(1, -1))).toBeNull();
    expect(averagePrecisionInterval(Float64Array.of(1, 2), Int8Array.of(1, 1))).toBeNull();
  });
});

describe("precision in the top of each day", () => {
  test("takes so many of each day, and all of a short one", () => {
    const scores = Float64Array.of(0.9, 0.8, 0.1, 0.2, 0.7, 0.5);
    const labels = Int8Array.of(1, -1, 1, 1, -1, 1);
    // Day 1: 0.9 and 0.8; day 2: 0.7 and 0.2; day 3: only 0.5.
    const top = precisionAtTop(scores, labels, [1, 1, 1, 2, 2, 3], 2);
    expect(top).toMatchObject({ n: 5, positives: 3, value: 0.6 });
    expect(top?.low).toBeCloseTo(0.230724, 6);
    expect(top?.high).toBeCloseTo(0.882379, 6);
  });

  test("takes the earlier of equal scores at the cut", () => {
    expect(precisionAtTop(Float64Array.of(1, 1, 1), Int8Array.of(-1, 1, 1), [0, 0, 0], 1)?.value).toBe(0);
  });

  test("is not defined without payments", () => {
    expect(precisionAtTop(new Float64Array(0), new Int8Array(0), [], 5)).toBeNull();
  });
});
