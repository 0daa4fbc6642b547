import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { isWithinReference } from "@/lib/losses/reference-rates";
import { divideHalfEven, shareOfAmount } from "@/lib/losses/rounding";
import { isNothing, ledgerLine, reversed, reviewCostMinor } from "@/lib/losses/rules";
import { partsPerMillion, type WeekSums, weekTotals } from "@/lib/losses/totals";

describe("half-even rounding of integers", () => {
  // Round half to even as IEEE 754 defines it for decimal numbers, here in thousandths or halves of a minor unit.
  test.each([
    [125n, 10n, 12n],
    [5n, 2n, 2n],
    [7n, 2n, 4n],
    [-5n, 2n, -2n],
    [-7n, 2n, -4n],
    [2675n, 10n, 268n],
    [0n, 7n, 0n],
    [1n, 3n, 0n],
    [2n, 3n, 1n],
    [-2n, 3n, -1n],
  ])("%i / %i → %i", (numerator, denominator, expected) => {
    expect(divideHalfEven(numerator, denominator)).toBe(expected);
  });

  test("a share is taken as the decimal it is written as, not as its binary neighbour", () => {
    // 2.675 as a double lies below the half; 1.005 of 100 would be 100.49999999999999.
    expect(shareOfAmount(100, 2.675)).toBe(268);
    expect(shareOfAmount(100, 1.005)).toBe(100);
    expect(shareOfAmount(300, 1.005)).toBe(302);
    expect(shareOfAmount(25, 0.02)).toBe(0);
    expect(shareOfAmount(75, 0.02)).toBe(2);
    expect(shareOfAmount(1_000_000_000, 1e-7)).toBe(100);
    expect(shareOfAmount(Number.MAX_SAFE_INTEGER, 1)).toBe(Number.MAX_SAFE_INTEGER);
    expect(() => shareOfAmount(1, -0.1)).toThrow(RangeError);
    expect(() => shareOfAmount(1, Number.NaN)).toThrow(RangeError);
    expect(() => divideHalfEven(1n, 0n)).toThrow(RangeError);
  });

  test("handling time costs its share of the hourly rate", () => {
    expect(reviewCostMinor(390, 3_600)).toBe(390);
    expect(reviewCostMinor(1, 1_800)).toBe(0);
    expect(reviewCostMinor(3, 1_800)).toBe(2);
    expect(reviewCostMinor(0, 3_600)).toBe(0);
    expect(() => reviewCostMinor(0.5, 3_600)).toThrow(RangeError);
  });
});

const finding = fc.record({
  verdict: fc.constantFrom("fraudulent" as const, "legitimate" as const, "customer_misuse" as const),
  amountBaseMinor: fc.option(fc.nat({ max: Number.MAX_SAFE_INTEGER }), { nil: null }),
  paymentState: fc.constantFrom(
    "pending" as const,
    "held" as const,
    "released" as const,
    "refused" as const,
    "settled" as const,
    "recalled" as const,
    "unknown" as const,
  ),
  wasPassed: fc.boolean(),
  handlingSeconds: fc.nat({ max: 14_400 }),
  terms: fc.record({
    reviewCostMinorPerHour: fc.nat({ max: 100_000 }),
    lostMargin: fc.double({ min: 0, max: 1, noNaN: true }),
  }),
});

describe("a ledger line", () => {
  test("holds whole minor units that keep to the definitions, whatever was found", () => {
    fc.assert(
      fc.property(finding, (given) => {
        const line = ledgerLine(given);
        for (const figure of Object.values(line))
          expect(Number.isSafeInteger(figure) && figure >= 0).toBe(true);
        expect([0, line.attemptedMinor]).toContain(line.preventedMinor);
        expect(line.missedMinor).toBeLessThanOrEqual(line.attemptedMinor - line.preventedMinor);
        expect(line.lostMarginMinor).toBeLessThanOrEqual(line.falsePositiveMinor);
        if (given.verdict !== "fraudulent") expect(line.attemptedMinor).toBe(0);
        if (given.verdict !== "legitimate") expect(line.falsePositiveMinor).toBe(0);
      }),
    );
  });

  test("and its reversal cancel exactly, figure by figure, in any order of booking", () => {
    fc.assert(
      fc.property(fc.array(finding, { maxLength: 20 }), (given) => {
        const lines = given.map(ledgerLine);
        const booked = [...lines, ...lines.toReversed().map(reversed)];
        for (const figure of Object.keys(reversed(ledgerLine(SAMPLE))) as (keyof ReturnType<
          typeof ledgerLine
        >)[]) {
          expect(booked.reduce((sum, line) => sum + BigInt(line[figure]), 0n)).toBe(0n);
        }
        for (const line of lines) expect(reversed(reversed(line))).toEqual(line);
      }),
    );
    expect(isNothing(ledgerLine({ ...SAMPLE, amountBaseMinor: 0 }))).toBe(true);
    expect(isNothing(ledgerLine(SAMPLE))).toBe(false);
  });
});

const SAMPLE = {
  verdict: "fraudulent" as const,
  amountBaseMinor: 1,
  paymentState: "settled" as const,
  wasPassed: false,
  handlingSeconds: 0,
  terms: { reviewCostMinorPerHour: 3_600, lostMargin: 0.02 },
};

const NO_SUMS: WeekSums = {
  attemptedMinor: 0n,
  preventedMinor: 0n,
  missedMinor: 0n,
  recoveredMinor: 0n,
  falsePositiveMinor: 0n,
  lostMarginMinor: 0n,
  reviewCostMinor: 0n,
  settledMinor: 0n,
  payments: 0,
  unpriced: 0,
  fraudulent: 0,
  legitimate: 0,
  customerMisuse: 0,
  alertsDecided: 0,
  alertsFraudulent: 0,
};

describe("rates", () => {
  test("are not defined over nothing, rather than 0", () => {
    expect(weekTotals(NO_SUMS)).toMatchObject({
      grossMinor: 0n,
      grossPpm: null,
      netPpm: null,
      totalCostPpm: null,
      valueDetectionPpm: null,
      precision: null,
      costPerCaseMinor: null,
    });
  });

  test("come from integers: 60 in 100,000 is 6 basis points, where floating point makes it 5.999999999999999", () => {
    expect((60 / 100_000) * 10_000).not.toBe(6);
    expect(partsPerMillion(60, 100_000)).toBe(600);
    expect(partsPerMillion(1_300_00, 1_000_000_00)).toBe(1_300);
    // 0.13 % is 13 basis points, 0.005 % half a one.
    expect(partsPerMillion(130, 100_000)).toBe(1_300);
    expect(partsPerMillion(5, 100_000)).toBe(50);
    expect(partsPerMillion(-50, 100_000)).toBe(-500);
  });
});

describe("reference fraud rates of Delegated Regulation (EU) 2018/389, Annex", () => {
  // The rates are the regulation's; the payments are our own, chosen to lie exactly on a rate and just above it.
  test.each([
    ["card", 100, 13_000, 13_001],
    ["card", 250, 6_000, 6_001],
    ["card", 500, 1_000, 1_001],
    ["credit_transfer", 100, 1_500, 1_501],
    ["credit_transfer", 250, 1_000, 1_001],
    ["credit_transfer", 500, 500, 501],
  ] as const)("%s up to %i euro: equal is within, a cent more is not", (family, threshold, equal, over) => {
    expect(isWithinReference(equal, 10_000_000, family, threshold)).toBe(true);
    expect(isWithinReference(over, 10_000_000, family, threshold)).toBe(false);
  });

  test("a type without turnover has no rate", () => {
    expect(isWithinReference(0, 0, "card", 100)).toBeNull();
  });
});
