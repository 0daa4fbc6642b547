import { describe, expect, test } from "vitest";
import { type DrawnPayment, estimatePassed } from "@/lib/learning/passed-rules";
import { seededNumbers } from "../scorer/fixture";

const drawn = (probability: number, more: Partial<DrawnPayment> = {}): DrawnPayment => ({
  probability,
  verdict: "other",
  isLapsed: false,
  amountBaseMinor: 10_000,
  ...more,
});

describe("the estimate of passed fraud", () => {
  test("is worked by hand for draws of two chances", () => {
    // 40 draws at 1 in 50 stand for 2,000, 20 at 1 in 25 for 500. Two frauds: 50 + 25 = 75 payments in 2,500, that is 30
    // in a thousand, and 50·120.00 + 25·80.00 = 8,000.00.
    const draws = [
      ...Array.from({ length: 39 }, () => drawn(0.02)),
      drawn(0.02, { verdict: "fraudulent", amountBaseMinor: 12_000 }),
      ...Array.from({ length: 19 }, () => drawn(0.04)),
      drawn(0.04, { verdict: "fraudulent", amountBaseMinor: 8_000 }),
    ];
    const { estimate, reason, ...counts } = estimatePassed(draws, 2_480);
    expect(counts).toEqual({
      passed: 2_480,
      drawn: 60,
      decided: 60,
      waiting: 0,
      lapsed: 0,
      foundFraudulent: 2,
    });
    expect(reason).toBeNull();
    expect(estimate?.standsFor).toBeCloseTo(2_500, 9);
    expect(estimate?.fraudulent.value).toBeCloseTo(75, 9);
    expect(estimate?.perThousand.value).toBeCloseTo(30, 9);
    expect(estimate?.valueMinor.value).toBe(800_000);
    // Fay and Feuer (1997), worked in R: v = .98·50² + .96·25² = 3050, w = 50;
    // v/75/2·qchisq(.025, 2·75²/v) and (v + w²)/(75 + w)/2·qchisq(.975, 2·(75 + w)²/(v + w²)).
    expect(estimate?.fraudulent.low).toBeCloseTo(7.95617588961, 4);
    expect(estimate?.fraudulent.high).toBeCloseTo(307.673901142, 4);
    expect(estimate?.perThousand.high).toBeCloseTo(307.673901142 / 2.5, 4);
  });

  test("takes draws without a verdict to be like those that have one", () => {
    const draws = [
      drawn(0.1, { verdict: "fraudulent" }),
      ...Array.from({ length: 9 }, () => drawn(0.1)),
      ...Array.from({ length: 7 }, () => drawn(0.1, { verdict: null })),
      ...Array.from({ length: 3 }, () => drawn(0.1, { verdict: null, isLapsed: true })),
    ];
    const { estimate, ...counts } = estimatePassed(draws, 200);
    expect(counts).toMatchObject({ drawn: 20, decided: 10, waiting: 7, lapsed: 3, foundFraudulent: 1 });
    // One in ten decided, 200 in all: 20, and not the 10 that the decided ones alone would stand for.
    expect(estimate?.fraudulent.value).toBeCloseTo(20, 9);
    expect(estimate?.perThousand.value).toBeCloseTo(100, 9);
  });

  test("after no find has an upper end and no lower one", () => {
    const { estimate } = estimatePassed(
      Array.from({ length: 100 }, () => drawn(0.01)),
      10_000,
    );
    expect(estimate?.fraudulent).toMatchObject({ value: 0, low: 0 });
    // The exact Poisson end for no find, 3.689, each standing for a hundred.
    expect(estimate?.fraudulent.high).toBeCloseTo(368.888, 2);
    expect(estimate?.valueMinor).toMatchObject({ value: 0, low: 0 });
    expect(estimate?.valueMinor.high).toBeCloseTo(3_688_879, -2);
  });

  test("is never less than what was found nor more than what passed", () => {
    const all = estimatePassed(
      Array.from({ length: 4 }, () => drawn(0.5, { verdict: "fraudulent" })),
      8,
    );
    expect(all.estimate?.fraudulent).toMatchObject({ value: 8, high: 8 });
    expect(all.estimate?.fraudulent.low).toBeGreaterThanOrEqual(4);
    expect(all.estimate?.perThousand.high).toBeLessThanOrEqual(1000);
  });

  test("says why there is none", () => {
    expect(estimatePassed([], 0)).toMatchObject({ estimate: null, reason: "nothing_passed" });
    expect(estimatePassed([], 500)).toMatchObject({ estimate: null, reason: "nothing_drawn" });
    expect(estimatePassed([drawn(0.1, { verdict: null })], 500)).toMatchObject({
      estimate: null,
      reason: "nothing_decided",
    });
  });

  test("counts what has no value in the base currency apart", () => {
    const { estimate } = estimatePassed(
      [drawn(0.5, { verdict: "fraudulent", amountBaseMinor: null }), drawn(0.5)],
      4,
    );
    expect(estimate?.unpriced).toBe(1);
    expect(estimate?.fraudulent.value).toBe(2);
    expect(estimate?.valueMinor.value).toBe(0);
  });

  test("is right on average and its interval holds the truth 95 times in 100, with a third still undecided", () => {
    const unit = seededNumbers(8);
    const passed = Array.from({ length: 5_000 }, (_, i) => ({
      fraudulent: i % 125 === 0,
      probability: i % 2 === 0 ? 0.02 : 0.05,
      amountBaseMinor: Math.round(1_000 * Math.exp(2 * unit())),
    }));
    const truth = passed.filter(({ fraudulent }) => fraudulent);
    const value = truth.reduce((sum, { amountBaseMinor }) => sum + amountBaseMinor, 0);
    const [runs, held] = [1_000, { number: 0, value: 0, rate: 0 }];
    let mean = 0;
    for (let run = 0; run < runs; run++) {
      const draws = passed
        .filter(({ probability }) => unit() < probability)
        .map(({ fraudulent, ...payment }) => ({
          ...payment,
          isLapsed: false,
          verdict: unit() < 1 / 3 ? null : fraudulent ? ("fraudulent" as const) : ("other" as const),
        }));
      const { estimate } = estimatePassed(draws, passed.length);
      if (!estimate) throw new Error("Nothing was drawn");
      mean += estimate.fraudulent.value / runs;
      const holds = ({ low, high }: { low: number; high: number }, what: number) =>
        low <= what && what <= high;
      if (holds(estimate.fraudulent, truth.length)) held.number += 1;
      if (holds(estimate.valueMinor, value)) held.value += 1;
      if (holds(estimate.perThousand, (1000 * truth.length) / passed.length)) held.rate += 1;
    }
    console.log(
      `${truth.length} frauds passed, estimated ${mean.toFixed(1)} on average; held`,
      held,
      `of ${runs}`,
    );
    expect(Math.abs(mean - truth.length)).toBeLessThan(3);
    for (const count of Object.values(held)) expect(count / runs).toBeGreaterThan(0.93);
  });
});
