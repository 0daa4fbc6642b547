import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { asItIs, hingeScale, logScale, oddsScale, ratioScale, shareScale } from "@/lib/signals/scale";

const scales = {
  log: { scale: logScale(50, 5_000), values: fc.double({ min: 0, max: 1e13, noNaN: true }) },
  ratio: { scale: ratioScale(10), values: fc.double({ min: 0, max: 1e13, noNaN: true }) },
  odds: { scale: oddsScale(0.02, 0.9), values: fc.double({ min: 1e-9, max: 1 - 1e-9, noNaN: true }) },
  share: { scale: shareScale(0.75), values: fc.double({ min: 0, max: 1, noNaN: true }) },
  asItIs: { scale: asItIs, values: fc.double({ min: -1, max: 1, noNaN: true }) },
  hinge: { scale: hingeScale({ from: 2, to: 6 }), values: fc.double({ min: 0, max: 1e13, noNaN: true }) },
};

describe.each(Object.entries(scales))("the %s scale", (_, { scale, values }) => {
  it("stays within -1 and 1 and never falls", () => {
    fc.assert(
      fc.property(values, values, (a, b) => {
        const [low, high] = a < b ? [a, b] : [b, a];
        const [x, y] = [scale.toUnit(low), scale.toUnit(high)];
        expect(x).toBeGreaterThanOrEqual(-1);
        expect(y).toBeLessThanOrEqual(1);
        expect(y).toBeGreaterThanOrEqual(x);
      }),
    );
  });

  it("leads back to the measure from inside its ends", () => {
    fc.assert(
      fc.property(fc.double({ min: 0.001, max: 0.24, noNaN: true }), (coordinate) => {
        expect(scale.toUnit(scale.fromUnit(coordinate))).toBeCloseTo(coordinate, 9);
      }),
    );
  });
});

describe("fixed points", () => {
  it("lie where the catalogue says", () => {
    expect([0, 50, 5_000, 1e9].map(logScale(50, 5_000).toUnit)).toEqual([expect.closeTo(-0.857, 3), 0, 1, 1]);
    expect([0.1, 1, 10].map(ratioScale(10).toUnit)).toEqual([expect.closeTo(-1, 12), 0, 1]);
    expect([0.02, 0.9].map(oddsScale(0.02, 0.9).toUnit)).toEqual([0, 1]);
    expect([0, 0.75, 1].map(shareScale(0.75).toUnit)).toEqual([-1, 0, expect.closeTo(1 / 3, 12)]);
    expect([0, 2, 6, 50].map(hingeScale({ from: 2, to: 6 }).toUnit)).toEqual([0, 0, 1, 1]);
    expect(hingeScale({ from: 2, to: 6 }).toUnit(3)).toBeCloseTo(Math.log(4 / 3) / Math.log(7 / 3), 12);
  });
});
