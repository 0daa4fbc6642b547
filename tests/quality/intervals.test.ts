import { describe, expect, test } from "vitest";
import { gammaQuantile, gammaShare, logGamma } from "@/lib/quality/gamma";
import { differenceOfShares } from "@/lib/quality/newcombe";
import { twoSidedP } from "@/lib/quality/normal";

test("two-sided probabilities are R's 2·pnorm(-|z|)", () => {
  // R 4.2: 2 * pnorm(-c(0, 0.5, 1.959963984540054, 3, 3.5, 3.6, 8, 20)).
  const expected = [
    [0, 1],
    [0.5, 0.6170750774519738],
    [-1.959963984540054, 0.05],
    [3, 0.0026997960632601866],
    [3.5, 0.0004652581580710802],
    [3.6, 0.0003182171803150676],
    [8, 1.2441921148543568e-15],
    [20, 5.507248237212467e-89],
  ] as const;
  for (const [z, p] of expected) expect(twoSidedP(z) / p).toBeCloseTo(1, 9);
});

test("the difference of two shares has Newcombe's hybrid interval", () => {
  // Newcombe, Statistics in Medicine 17 (1998), method 10: 56/70 and 48/80; printed .0524 to .3339, from memory.
  const { difference, low, high } = differenceOfShares({ count: 56, of: 70 }, { count: 48, of: 80 });
  expect(difference).toBeCloseTo(0.2, 12);
  expect(low).toBeCloseTo(0.052431, 6);
  expect(high).toBeCloseTo(0.333873, 6);
});

describe("the gamma function and its quantiles", () => {
  test("agree with factorials and with R's pgamma and qgamma", () => {
    expect(Math.exp(logGamma(5))).toBeCloseTo(24, 10);
    expect(logGamma(0.5)).toBeCloseTo(Math.log(Math.PI) / 2, 12);
    // P(1, x) = 1 − e^(−x).
    expect(gammaShare(1, 2)).toBeCloseTo(1 - Math.exp(-2), 14);
    // R 4.2: pgamma(3.5, 2.2), pgamma(40, 30), qgamma(0.025, 5), qgamma(0.975, 0.3), qchisq(0.975, 2) / 2.
    expect(gammaShare(2.2, 3.5)).toBeCloseTo(0.8324777082416663, 12);
    expect(gammaShare(30, 40)).toBeCloseTo(0.9567713178482644, 12);
    expect(gammaQuantile(5, 0.025)).toBeCloseTo(1.6234863901184207, 9);
    expect(gammaQuantile(0.3, 0.975)).toBeCloseTo(1.9002636428388271, 9);
    expect(gammaQuantile(1, 0.975)).toBeCloseTo(-Math.log(0.025), 9);
  });
});
