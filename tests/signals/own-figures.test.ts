import { describe, expect, it } from "vitest";
import { numberText } from "@/components/signals/number-text";
import { readNumber } from "@/components/signals/signal-draft";
import { figuresOf } from "@/lib/signals/own-figures";
import { ownKey } from "@/lib/signals/own-key";
import { protectedAttribute } from "@/lib/signals/protected-attributes";

const measured = (values: readonly (number | null)[]) =>
  values.map((value, index) => ({ externalId: `P-${index}`, value }));

describe("the figures of a preview", () => {
  it("take the middle from the median and the reach from the farther of the outer hundredths", () => {
    // R: quantile(c(0:99, 1000), c(.01, .5, .99)) gives 1, 50 and 99 (type 7, its default), from memory of the rule.
    const { suggested, values, available, payments } = figuresOf(
      measured([...Array.from({ length: 100 }, (_, n) => n), 1000, null]),
      [],
      null,
    );
    expect(values).toEqual({ min: 0, median: 50, max: 1000 });
    expect(suggested).toEqual({ middle: 50, reach: 49 });
    expect([available, payments]).toEqual([101, 102]);
  });

  it("reach to the farthest value where the outer hundredths are the median, and to 1 where all are alike", () => {
    const rare = [...new Array<number>(400).fill(0), 1];
    expect(figuresOf(measured(rare), [], null).suggested).toEqual({ middle: 0, reach: 1 });
    expect(figuresOf(measured([7, 7, 7]), [], null).suggested).toEqual({ middle: 7, reach: 1 });
  });

  it("count scaled values in twenty steps, the ends with what lies beyond them", () => {
    const { histogram } = figuresOf(measured([-50, -1, 0, 0.95, 1, 50]), [], { middle: 0, reach: 1 });
    expect(histogram).toHaveLength(20);
    expect([histogram[0], histogram[10], histogram[19]]).toEqual([2, 1, 3]);
  });

  it("compare fraud with legitimate on the scale, and only where there are both", () => {
    const labelled = [
      { label: 1, value: 2 },
      { label: 1, value: 1 },
      { label: -1, value: 0 },
      { label: -1, value: null },
    ];
    expect(figuresOf(measured([0]), labelled, { middle: 0, reach: 2 }).labelled).toEqual({
      fraudulent: { count: 2, mean: 0.75 },
      legitimate: { count: 1, mean: 0 },
      difference: 0.75,
    });
    expect(figuresOf(measured([0]), labelled.slice(0, 2), { middle: 0, reach: 2 }).labelled).toBeNull();
  });
});

describe("keys from names", () => {
  it.each([
    ["Loyal & large", "own_loyal_large"],
    ["Überfällige Pakete", "own_uberfallige_pakete"],
    ["!!!", "own_signal"],
    ["Taken", "own_taken_2"],
    ["x".repeat(80), `own_${"x".repeat(36)}`],
  ])("%s becomes %s", (name, key) => {
    expect(ownKey(name, new Set(["own_taken"]))).toBe(key);
  });
});

describe("numbers in the form", () => {
  it.each([
    ["3", 3],
    ["−2,5", -2.5],
    ["1e3", 1000],
    ["", null],
    ["a lot", null],
    ["0x10", null],
    ["1e999", null],
  ])("%s reads as %s", (text, value) => {
    expect(readNumber(text)).toBe(value);
  });

  it.each([
    [1234567.891, "1\u202f235\u202f000"],
    [-0.123456, "−0.1235"],
    [12345, "12\u202f350"],
    [1e21, "1.000e+21"],
  ])("%d is written %s", (value, text) => {
    expect(numberText(value)).toBe(text);
  });
});

describe("names that only look protected", () => {
  it.each([
    "average",
    "package",
    "usage_count",
    "storage",
    "accountAge",
    "sim_age_days",
    "language",
    "message",
  ])("%s", (name) => {
    expect(protectedAttribute(name)).toBeNull();
  });
});
