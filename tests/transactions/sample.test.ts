import { describe, expect, it } from "vitest";
import { expectedPassed, isDrawn, sampleProbability } from "@/lib/transactions/sample";

describe("the chance of a sample", () => {
  it("spends the wished share of the capacity on the payments expected to pass", () => {
    expect(sampleProbability(0.03, 120, 1_200)).toBeCloseTo(0.003, 12);
    expect(sampleProbability(0.03, 120, 2)).toBe(1);
    expect(sampleProbability(0.03, 120, 0)).toBe(1);
    expect(sampleProbability(0, 120, 1_200)).toBe(0);
  });

  it("reckons with the mean of the days before, or with today where that is more already", () => {
    const day = (name: string, passed: number) => ({ day: name, received: passed, passed });
    const counted = [day("2026-03-01", 100), day("2026-03-02", 300), day("2026-03-03", 150)];
    expect(expectedPassed("2026-03-03", counted, 120)).toBe(200);
    expect(expectedPassed("2026-03-03", [...counted.slice(0, 2), day("2026-03-03", 900)], 120)).toBe(900);
  });

  it("is modest on the first day, when nothing has been counted", () => {
    expect(expectedPassed("2026-03-01", [], 120)).toBe(2_400);
  });
});

describe("the draw", () => {
  const secret = Buffer.alloc(32, 7);
  const ids = Array.from(
    { length: 20_000 },
    (_, i) => `018e0000-0000-7000-8000-${i.toString(16).padStart(12, "0")}`,
  );

  it("can be repeated with the secret and the identifier", () => {
    const drawn = () => ids.filter((id) => isDrawn(secret, id, 0.1));
    expect(drawn()).toEqual(drawn());
    expect(ids.filter((id) => isDrawn(Buffer.alloc(32, 8), id, 0.1))).not.toEqual(drawn());
  });

  it("draws with the stated chance", () => {
    const drawn = ids.filter((id) => isDrawn(secret, id, 0.1)).length;
    // Five standard deviations of a binomial count either way.
    expect(Math.abs(drawn - 2_000)).toBeLessThan(5 * Math.sqrt(20_000 * 0.1 * 0.9));
    expect(ids.some((id) => isDrawn(secret, id, 0))).toBe(false);
    expect(ids.every((id) => isDrawn(secret, id, 1))).toBe(true);
  });
});
