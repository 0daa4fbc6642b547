import { expect, test } from "vitest";
import { wilsonInterval } from "@/lib/quality/wilson";

// Newcombe, "Two-sided confidence intervals for the single proportion", Statistics in Medicine 17 (1998), Table I,
// method 3. The published values carry four places.
test.each([
  [81, 263, 0.2553, 0.3662],
  [15, 148, 0.0624, 0.1605],
  [0, 20, 0, 0.1611],
  [1, 29, 0.0061, 0.1718],
])("%i of %i lies between %f and %f", (count, of, low, high) => {
  const interval = wilsonInterval(count, of);
  expect(interval.low).toBeCloseTo(low, 4);
  expect(interval.high).toBeCloseTo(high, 4);
});

test("none begins at exactly 0 and all ends at exactly 1", () => {
  expect(wilsonInterval(0, 1).low).toBe(0);
  expect(wilsonInterval(1, 1).high).toBe(1);
  expect(wilsonInterval(0, 1).high).toBeCloseTo(0.793451, 6);
  expect(wilsonInterval(1, 1).low).toBeCloseTo(0.206549, 6);
});

test("a share of nothing, or of more than all, has no interval", () => {
  expect(() => wilsonInterval(0, 0)).toThrow(RangeError);
  expect(() => wilsonInterval(3, 2)).toThrow(RangeError);
});
