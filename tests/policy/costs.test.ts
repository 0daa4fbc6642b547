import { expect, test } from "vitest";
import { type CostMatrix, costMinimalProbability, costsOf } from "@/lib/policy/costs";

/** Elkan's order: c00, c10, c01, c11, with the decision first and 1 = fraudulent. */
type Costs = readonly [c00: number, c10: number, c01: number, c11: number];
const matrix = ([c00, c10, c01, c11]: Costs): CostMatrix => ({
  passLegitimate: c00,
  stopLegitimate: c10,
  passFraudulent: c01,
  stopFraudulent: c11,
});

// Elkan, "The Foundations of Cost-Sensitive Learning", IJCAI 2001, equation 2: p* = (c10 − c00)/(c10 − c00 + c01 − c11).
// The formula is from memory of the paper; the fractions are its arithmetic, worked by hand.
test.each([
  [[0, 1, 1, 0], 1 / 2],
  [[0, 1, 10, 0], 1 / 11],
  [[0, 5, 100, 0], 1 / 21],
  [[0, 1, 99, 0], 0.01],
] as const)("costs %j make stopping the cheaper act from probability %d on", (costs, expected) => {
  expect(costMinimalProbability(matrix(costs))).toBeCloseTo(expected, 15);
});

test("at that probability both acts cost the same, and beyond it the other one is cheaper", () => {
  const cost = matrix([0.5, 3, 40, 2]);
  const p = costMinimalProbability(cost) as number;
  const stop = (q: number) => q * cost.stopFraudulent + (1 - q) * cost.stopLegitimate;
  const pass = (q: number) => q * cost.passFraudulent + (1 - q) * cost.passLegitimate;
  expect(stop(p)).toBeCloseTo(pass(p), 12);
  expect(stop(p + 0.01)).toBeLessThan(pass(p + 0.01));
  expect(stop(p - 0.01)).toBeGreaterThan(pass(p - 0.01));
});

// Elkan 2001, "reasonableness": c10 > c00 and c01 > c11, or one act is the better one whatever the payment.
test.each([[[1, 1, 10, 0]], [[2, 1, 10, 0]], [[0, 1, 3, 3]], [[0, 1, 2, 3]]] as const)(
  "costs %j are not reasonable and yield no probability",
  (costs) => {
    expect(costMinimalProbability(matrix(costs))).toBeNull();
  },
);

test("a policy's terms make the point fall with the amount", () => {
  const terms = { falsePositiveCostMinor: 500, lossGivenFraud: 0.8 };
  expect(costMinimalProbability(costsOf(terms, 10_000))).toBeCloseTo(500 / 8_500, 15);
  expect(costMinimalProbability(costsOf(terms, 100_000))).toBeCloseTo(500 / 80_500, 15);
});
