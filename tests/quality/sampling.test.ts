import { describe, expect, test } from "vitest";
import { horvitzThompson } from "@/lib/quality/horvitz-thompson";
import { weightedSumInterval } from "@/lib/quality/weighted-sum-interval";
import { seededNumbers } from "../scorer/fixture";

describe("the Horvitz–Thompson total", () => {
  test("of three farms drawn with replacement is 64.03", () => {
    // Thompson, Sampling (third edition), chapter 6, exercise: y 3, 10, 7 with p .06, .20, .10 in three draws, so that a
    // member is in the sample with probability 1 − (1 − p)³.
    const probabilities = [0.06, 0.2, 0.1].map((p) => 1 - (1 - p) ** 3);
    expect(probabilities[0]).toBeCloseTo(0.169416, 6);
    expect(horvitzThompson([3, 10, 7], probabilities).total).toBeCloseTo(64.029952, 6);
  });

  test("and its variance, by hand, for independent draws", () => {
    // Own arithmetic by the formula in Särndal, Swensson and Wretman (1992), section 3.5:
    // 2/.5 + 3/.25 = 16; (1 − .5)·4² + (1 − .25)·12² = 8 + 108 = 116.
    const estimate = horvitzThompson([2, 3], [0.5, 0.25]);
    expect(estimate.total).toBe(16);
    expect(estimate.variance).toBe(116);
    expect(estimate.low).toBeCloseTo(16 - 1.959964 * Math.sqrt(116), 4);
  });

  test("of reviewed bands is 165 frauds where the share among the reviewed would be 7.7 times too high", () => {
    // Own construction: bands of 50, 450 and 9,500 payments, reviewed 50, 90 and 95, found 20, 9 and 1.
    const found = [
      ...Array.from({ length: 20 }, () => 1),
      ...Array.from({ length: 9 }, () => 90 / 450),
      95 / 9500,
    ];
    const { total } = horvitzThompson(
      found.map(() => 1),
      found,
    );
    expect(total).toBeCloseTo(165, 9);
    expect(30 / 235 / (total / 10_000)).toBeCloseTo(7.7, 1);
  });

  test("is unbiased, and so is its variance, over all samples of a small population", () => {
    const values = [5, 0, 2, 9];
    const chances = [0.5, 0.2, 0.8, 0.3];
    let mean = 0;
    let meanSquare = 0;
    let meanVariance = 0;
    for (let mask = 0; mask < 16; mask++) {
      const drawn = values.map((_, i) => (mask >> i) % 2 === 1);
      const chance = chances.reduce((all, pi, i) => all * (drawn[i] ? pi : 1 - pi), 1);
      const { total, variance } = horvitzThompson(
        values.filter((_, i) => drawn[i]),
        chances.filter((_, i) => drawn[i]),
      );
      mean += chance * total;
      meanSquare += chance * total * total;
      meanVariance += chance * variance;
    }
    expect(mean).toBeCloseTo(16, 10);
    expect(meanVariance).toBeCloseTo(meanSquare - mean * mean, 9);
  });

  test("refuses a chance of 0", () => {
    expect(() => horvitzThompson([1], [0])).toThrow(/Probability 0/);
    expect(() => horvitzThompson([Number.NaN], [0.5])).toThrow(/Value 0/);
  });
});

describe("the interval of a weighted sum", () => {
  test("with weights of 1 is Garwood's exact one for a Poisson count", () => {
    // R: poisson.test(0), poisson.test(3), poisson.test(25); Garwood, Biometrika 28 (1936).
    for (const [count, low, high] of [
      [0, 0, 3.688879],
      [3, 0.618672, 8.767273],
      [25, 16.178682, 36.904932],
    ] as const) {
      const interval = weightedSumInterval(count, count, 1);
      expect(interval.low).toBeCloseTo(low, 5);
      expect(interval.high).toBeCloseTo(high, 5);
    }
  });

  test("after no find reaches 3.69 times the largest weight", () => {
    const { low, high } = weightedSumInterval(0, 0, 40);
    expect(low).toBe(0);
    expect(high).toBeCloseTo(40 * 3.688879, 4);
  });

  test("holds the number and the value of frauds among passed payments at least 95 times in 100", () => {
    // Days of different chances, as the policy's share and the day's traffic make them; few frauds, so that a normal
    // interval would fail: its coverage is printed beside.
    const unit = seededNumbers(11);
    for (const frauds of [3, 12, 40, 150]) {
      const amounts = Array.from({ length: frauds }, () => Math.exp(9 + unit()));
      const chances = Array.from({ length: frauds }, (_, i) => [0.02, 0.05, 0.1][i % 3] as number);
      const value = amounts.reduce((sum, amount) => sum + amount, 0);
      const largest = Math.max(...amounts.map((amount, i) => amount / (chances[i] as number)));
      const runs = 2_000;
      const held = { number: 0, value: 0, normal: 0 };
      for (let run = 0; run < runs; run++) {
        const drawn = amounts.map((_, i) => i).filter((i) => unit() < (chances[i] as number));
        const pi = drawn.map((i) => chances[i] as number);
        const number = horvitzThompson(
          drawn.map(() => 1),
          pi,
        );
        const sum = horvitzThompson(
          drawn.map((i) => amounts[i] as number),
          pi,
        );
        const ofNumber = weightedSumInterval(number.total, number.variance, 50);
        const ofValue = weightedSumInterval(sum.total, sum.variance, largest);
        if (ofNumber.low <= frauds && frauds <= ofNumber.high) held.number += 1;
        if (ofValue.low <= value && value <= ofValue.high) held.value += 1;
        if (number.low <= frauds && frauds <= number.high) held.normal += 1;
      }
      const percent = (count: number) => `${((100 * count) / runs).toFixed(1)} %`;
      console.log(
        `${frauds} frauds passed: number ${percent(held.number)}, value ${percent(held.value)}, normal ${percent(held.normal)}`,
      );
      // 95 % less three standard deviations of 2,000 runs.
      expect(held.number / runs).toBeGreaterThan(0.935);
      expect(held.value / runs).toBeGreaterThan(0.935);
    }
  });
});
