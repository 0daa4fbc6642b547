import { describe, expect, test } from "vitest";
import { CUSUM_START, stepCusum } from "@/lib/quality/cusum";
import { PAGE_HINKLEY_START, riseOf, stepPageHinkley } from "@/lib/quality/page-hinkley";
import { populationStability } from "@/lib/quality/population-stability";

describe("the cumulative sum", () => {
  test("follows the worked example of the NIST handbook and signals at its fourteenth sample", () => {
    // NIST/SEMATECH e-Handbook of Statistical Methods, 6.3.2.3: mean 325, k 0.3175, h 4.1959; from memory.
    const samples = [
      324.925, 324.675, 324.725, 324.35, 325.35, 325.225, 324.125, 324.525, 325.225, 324.6, 324.625, 325.15,
      328.325, 327.25, 327.825, 328.5, 326.675, 327.775, 326.875, 328.35,
    ];
    const [mean, slack, line] = [325, 0.3175, 4.1959];
    let sums = CUSUM_START;
    const upper = samples.map((x) => {
      sums = stepCusum(sums, x - mean - slack, mean - slack - x);
      return sums.upper;
    });
    const expected = [
      0, 0, 0, 0, 0.0325, 0, 0, 0, 0, 0, 0, 0, 3.0075, 4.94, 7.4475, 10.63, 11.9875, 14.445, 16.0025, 19.035,
    ];
    upper.forEach((sum, i) => {
      expect(sum).toBeCloseTo(expected[i] as number, 8);
    });
    expect(upper.findIndex((sum) => sum > line) + 1).toBe(14);
  });

  test("sums falls apart from rises", () => {
    let sums = stepCusum(CUSUM_START, 2, -3);
    expect(sums).toEqual({ upper: 2, lower: 0 });
    sums = stepCusum(sums, -1, 4);
    expect(sums).toEqual({ upper: 1, lower: 4 });
  });
});

describe("the Page–Hinkley test", () => {
  test("sums what lies beyond the running mean, by hand", () => {
    // Values 1, 1, 4, tolerance 0.5: means 1, 1, 2; steps −.5, −.5, 1.5; sums −.5, −1, .5; lowest −1; rise 1.5.
    let state = PAGE_HINKLEY_START;
    const states = [1, 1, 4].map((x) => {
      state = stepPageHinkley(state, x, 0.5);
      return state;
    });
    expect(states.map(riseOf)).toEqual([0, 0, 1.5]);
    expect(states.at(-1)).toEqual({ n: 3, mean: 2, sum: 0.5, least: -1 });
  });
});

describe("the population stability index", () => {
  test("of a worked example is 0.080472, in shares or counts", () => {
    // Own arithmetic: (−.05)ln(.5) + (−.05)ln(.75) + 0 + .05·ln(1.25) + .05·ln(1.5).
    expect(populationStability([0.1, 0.2, 0.4, 0.2, 0.1], [0.05, 0.15, 0.4, 0.25, 0.15])).toBeCloseTo(
      0.080472,
      6,
    );
    expect(populationStability([10, 20, 40, 20, 10], [1, 3, 8, 5, 3])).toBeCloseTo(0.080472, 6);
  });

  test("is 0 for the same distribution and not defined for an empty bin", () => {
    expect(populationStability([3, 7], [30, 70])).toBe(0);
    expect(() => populationStability([1, 0], [1, 1])).toThrow(/Bin 1/);
    expect(() => populationStability([1, 1], [1, 1, 1])).toThrow(/same bins/);
  });
});
