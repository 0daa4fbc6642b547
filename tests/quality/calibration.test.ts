import { describe, expect, test } from "vitest";
import { brier } from "@/lib/quality/brier";
import { calibrationBins } from "@/lib/quality/calibration-bins";
import { isotonicFit } from "@/lib/quality/isotonic";
import { meanLogLoss } from "@/lib/quality/mean-log-loss";
import { recalibrationSteps } from "@/lib/quality/recalibrate";
import { rocArea } from "@/lib/quality/roc-area";
import { spiegelhalter } from "@/lib/quality/spiegelhalter";
import { bestInHindsight } from "@/lib/scorer";
import { seededNumbers } from "../scorer/fixture";
import { birthWeight } from "../scorer/published";
import { judged } from "./judged";

/** Brier, Monthly Weather Review 78 (1950): ten forecasts of rain; figures from memory, arithmetic checked in R. */
const RAIN = judged([0, 1, 1, 1, 0, 0, 0, 0, 0, 0], [0.7, 0.9, 0.8, 0.4, 0.2, 0, 0, 0, 0, 0.1]);

/** Worked with R's rms::val.prob. */
const TEN = judged([0, 0, 0, 1, 0, 1, 1, 0, 1, 1], [0.1, 0.1, 0.2, 0.3, 0.3, 0.6, 0.7, 0.8, 0.9, 0.9]);

/** The logistic model of low birth weight in Hosmer and Lemeshow (1989), fitted by our own hindsight. */
const BIRTHS = (() => {
  const { vectors, labels } = birthWeight((r) => [r.age, r.lwt, ...r.race, r.smoke, r.ptl, r.ht, r.ui]);
  const { weights } = bestInHindsight(vectors, labels, 1e6);
  const margins = vectors.map((x) => x.reduce((sum, value, i) => sum + value * (weights[i] as number), 0));
  return {
    p: Float64Array.from(margins, (margin) => 1 / (1 + Math.exp(-margin))),
    labels: Int8Array.from(labels),
  };
})();

describe("the Brier score", () => {
  test("of the rain is 0.095, half of what Brier's two-class sum of 1950 gives", () => {
    expect(brier(RAIN.scores, RAIN.labels)?.value).toBeCloseTo(0.19 / 2, 12);
  });

  test("of the ten payments is 0.155, with the standard error of its mean", () => {
    const found = brier(TEN.scores, TEN.labels);
    expect(found?.value).toBeCloseTo(0.155, 12);
    // Squared errors .01 .01 .04 .49 .09 .16 .09 .64 .01 .01: their standard deviation over √10.
    expect(found?.standardError).toBeCloseTo(0.0709656, 6);
    expect(found?.low).toBeCloseTo(0.155 - 1.959964 * 0.0709656, 5);
  });

  test("of the birth weights is 0.17943473 (R, glm)", () => {
    expect(brier(BIRTHS.p, BIRTHS.labels)?.value).toBeCloseTo(0.17943473, 8);
  });

  test("is not defined for fewer than two labels, and refuses what is no probability", () => {
    expect(brier(Float64Array.of(0.5), Int8Array.of(1))).toBeNull();
    expect(() => brier(Float64Array.of(1.1, 0), Int8Array.of(1, 1))).toThrow(/Probability 0/);
  });
});

describe("the log-loss", () => {
  test("of the ten payments is 0.468217", () => {
    expect(meanLogLoss(TEN.scores, TEN.labels)?.value).toBeCloseTo(0.468217, 6);
  });

  test("of the birth weights is 0.53287553 (R, glm)", () => {
    expect(meanLogLoss(BIRTHS.p, BIRTHS.labels)?.value).toBeCloseTo(0.53287553, 8);
  });

  test("is infinite where the impossible came", () => {
    expect(meanLogLoss(Float64Array.of(0, 0.5), Int8Array.of(1, 1))?.value).toBe(Number.POSITIVE_INFINITY);
  });
});

test("the birth weights' ROC area is 0.746089 with DeLong's 0.672479 to 0.819698 (R, pROC)", () => {
  const area = rocArea(BIRTHS.p, BIRTHS.labels);
  expect(area?.area).toBeCloseTo(0.746089, 6);
  expect(area?.standardError).toBeCloseTo(0.037557, 6);
  expect(area?.low).toBeCloseTo(0.672479, 6);
  expect(area?.high).toBeCloseTo(0.819698, 6);
});

describe("Spiegelhalter's z", () => {
  test("of the ten payments is 0", () => {
    expect(spiegelhalter(TEN.scores, TEN.labels)?.z).toBeCloseTo(0, 12);
    expect(spiegelhalter(TEN.scores, TEN.labels)?.p).toBeCloseTo(1, 12);
  });

  test("of the birth weights is R's rms::val.prob: 0.084875, p 0.932361", () => {
    const found = spiegelhalter(BIRTHS.p, BIRTHS.labels);
    expect(found?.z).toBeCloseTo(0.084875, 6);
    expect(found?.p).toBeCloseTo(0.932361, 6);
  });

  test("is standard normal where the probabilities are true, and far off where they are too sure", () => {
    const unit = seededNumbers(5);
    const z = (sharpen: number) => {
      const p = Float64Array.from({ length: 400 }, () => 0.02 + 0.5 * unit());
      const labels = Int8Array.from(p, (one) => (unit() < one ? 1 : -1));
      const told = p.map((one) => 1 / (1 + ((1 - one) / one) ** sharpen));
      return (spiegelhalter(told, labels) as { z: number }).z;
    };
    const honest = Array.from({ length: 400 }, () => z(1));
    const outside = honest.filter((one) => Math.abs(one) > 1.96).length;
    expect(outside).toBeGreaterThan(6);
    expect(outside).toBeLessThan(36);
    const boastful = Array.from({ length: 50 }, () => z(2));
    expect(boastful.filter((one) => one > 1.96).length).toBeGreaterThan(45);
  });

  test("is not defined where nothing could vary", () => {
    expect(spiegelhalter(new Float64Array(0), new Int8Array(0))).toBeNull();
    expect(spiegelhalter(Float64Array.of(0.5, 0.5), Int8Array.of(1, -1))).toBeNull();
  });
});

describe("the reliability curve", () => {
  test("cuts into bins of equal number", () => {
    const bins = calibrationBins(TEN.scores, TEN.labels, 5);
    expect(bins.map(({ n }) => n)).toEqual([2, 3, 1, 2, 2]);
    expect(bins.map(({ positives }) => positives)).toEqual([0, 1, 1, 1, 2]);
    expect(bins[1]).toMatchObject({ from: 0.2, to: 0.3, observed: 1 / 3 });
    expect(bins[1]?.meanPredicted).toBeCloseTo(0.8 / 3, 12);
    // Wilson (1927) for 2 of 2 and 0 of 2.
    expect(bins[4]).toMatchObject({ high: 1 });
    expect(bins[4]?.low).toBeCloseTo(0.34238, 6);
    expect(bins[0]?.high).toBeCloseTo(0.65762, 6);
  });

  test("never tears equal probabilities apart", () => {
    const bins = calibrationBins(Float64Array.of(0.2, 0.2, 0.2, 0.2, 0.7), Int8Array.of(1, -1, -1, -1, 1), 5);
    expect(bins.map(({ from, to, n }) => [from, to, n])).toEqual([
      [0.2, 0.2, 4],
      [0.7, 0.7, 1],
    ]);
  });

  test("is empty without payments", () => {
    expect(calibrationBins(new Float64Array(0), new Int8Array(0), 10)).toEqual([]);
  });
});

describe("isotonic recalibration", () => {
  test("is R's isoreg on the example of its help page", () => {
    expect([...isotonicFit([1, 0, 4, 3, 3, 5, 4, 2, 0])]).toEqual([0.5, 0.5, 3, 3, 3, 3, 3, 3, 3]);
  });

  test("counts a weight like so many equal values", () => {
    expect([...isotonicFit([3, 1, 2], [1, 3, 1])]).toEqual([1.5, 1.5, 2]);
    expect([...isotonicFit([3, 1, 1, 1, 2])]).toEqual([1.5, 1.5, 1.5, 1.5, 2]);
  });

  test("gives the shares that the probabilities should have been", () => {
    const steps = recalibrationSteps(TEN.scores, TEN.labels);
    // By hand: 0/2 at .1, 0/1 at .2, 1/2 at .3, then 1 1 0 at .6 .7 .8 pool to 2/3, and 2/2 at .9.
    expect(steps.map(({ from, to, n, positives }) => [from, to, n, positives])).toEqual([
      [0.1, 0.2, 3, 0],
      [0.3, 0.3, 2, 1],
      [0.6, 0.8, 3, 2],
      [0.9, 0.9, 2, 2],
    ]);
    expect(steps[2]?.share).toBeCloseTo(2 / 3, 12);
  });

  test("never worsens the Brier score of what it was fitted on", () => {
    const steps = recalibrationSteps(BIRTHS.p, BIRTHS.labels);
    const better = BIRTHS.p.map((one) => steps.find(({ to }) => one <= to)?.share as number);
    expect(brier(better, BIRTHS.labels)?.value).toBeLessThan(brier(BIRTHS.p, BIRTHS.labels)?.value as number);
    expect(steps.every(({ share }, i) => i === 0 || share > (steps[i - 1]?.share as number))).toBe(true);
  });
});
