import { describe, expect, test } from "vitest";
import { curveOf } from "@/lib/learning/curve";
import { isNewFitDue, prefixesOf } from "@/lib/learning/hindsight-rules";

const rows = (count: number) =>
  Array.from({ length: count }, (_, i) => ({ seq: 2 * i + 1, at: new Date(i * 1_000) }));
const ones = (count: number) => new Float64Array(count).fill(1);

describe("the curve of cumulative losses", () => {
  test("of a short log has every row; of none, nothing", () => {
    const curve = curveOf(rows(5), [{ id: "a", losses: ones(5) }], new Map());
    expect(curve.map(({ losses }) => losses.a)).toEqual([1, 2, 3, 4, 5]);
    expect(curveOf([], [], new Map([[1, 2]]))).toEqual([]);
  });

  test.each([119, 120, 121, 1_000, 20_000])(
    "of %i rows has at most 120 points and ends with the last",
    (count) => {
      const hindsight = new Map([
        [51, 3],
        [2 * count - 1, 9],
      ]);
      const curve = curveOf(rows(count), [{ id: "a", losses: ones(count) }], hindsight);
      expect(curve.length).toBeLessThanOrEqual(120);
      expect(curve.at(-1)).toMatchObject({ seq: 2 * count - 1, losses: { a: count }, hindsight: 9 });
      expect(curve.find(({ seq }) => seq === 51)).toMatchObject({ hindsight: 3, losses: { a: 26 } });
      expect(curve.filter(({ hindsight: known }) => known !== null)).toHaveLength(2);
    },
  );

  test("ends for a scorer where it has come to", () => {
    const curve = curveOf(rows(4), [{ id: "late", losses: ones(2) }], new Map());
    expect(curve.map(({ losses }) => losses.late)).toEqual([1, 2, undefined, undefined]);
  });
});

describe("what hindsight is computed for", () => {
  test("shorter logs stay where they are while the log grows", () => {
    expect(prefixesOf(0)).toEqual([]);
    expect(prefixesOf(30)).toEqual([30]);
    expect(prefixesOf(50)).toEqual([50]);
    expect(prefixesOf(400)).toEqual([50, 100, 200, 400]);
    expect(prefixesOf(100_000)).toHaveLength(12);
  });

  test("anew with a twentieth more labels, and with a hundred at the latest", () => {
    expect(isNewFitDue(400, 0)).toBe(false);
    expect(isNewFitDue(400, 19)).toBe(false);
    expect(isNewFitDue(400, 20)).toBe(true);
    expect(isNewFitDue(100_000, 99)).toBe(false);
    expect(isNewFitDue(100_000, 100)).toBe(true);
  });
});
