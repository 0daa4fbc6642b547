import { describe, expect, it } from "vitest";
import { actLine } from "@/components/desk/act-line";
import { moveInGrid } from "@/components/desk/grid-moves";
import { movedLine } from "@/components/desk/moved-line";
import { waitTimes } from "@/components/desk/wait-times";
import { spanWords } from "@/components/ui/span-words";

describe("what moved", () => {
  it("names how many moved, what crossed the hold line, and that no payment changed", () => {
    expect(movedLine({ up: 30, down: 7, aboveHoldLine: 4, belowHoldLine: 0 })).toBe(
      "37 cases moved; 4 now rank above the hold line; no payment changed.",
    );
    expect(movedLine({ up: 1, down: 1, aboveHoldLine: 1, belowHoldLine: 2 })).toBe(
      "2 cases moved; 1 now ranks above and 2 now rank below the hold line; no payment changed.",
    );
    expect(movedLine({ up: 1, down: 0, aboveHoldLine: 0, belowHoldLine: 0 })).toBe(
      "1 case moved; no payment changed.",
    );
  });

  it("says so when the server could not count", () => {
    expect(movedLine(null)).toBe("The scorer has learned; what moved was not counted.");
  });
});

describe("what was done", () => {
  it("reads as a sentence after the case's name", () => {
    const finding = { verdict: "fraudulent", confidence: "sure", typology: "details_theft" } as const;
    const base = { kind: "decision", finding, note: "", scoreWasHidden: false } as const;
    expect(actLine({ ...base, together: [] })).toBe("decided fraudulent, sure: card details theft");
    expect(actLine({ ...base, together: [{ caseId: "a" }] })).toContain("with 1 other");
    expect(actLine({ ...base, together: [{ caseId: "a" }, { transactionId: "b" }] })).toContain(
      "with 2 others",
    );
    expect(actLine({ kind: "escalation", note: "x" })).toBe("escalated");
    expect(actLine({ kind: "waiting", until: "2026-03-03T09:00:00Z", note: "x" })).toBe("set aside");
  });
});

describe("times to set a case aside until", () => {
  it("are mornings of the person's own zone, also across the change to summer time", () => {
    const [, , tomorrow, later] = waitTimes(new Date("2026-03-28T20:00:00Z"), "Europe/Berlin");
    expect(tomorrow?.until.toISOString()).toBe("2026-03-29T07:00:00.000Z");
    expect(later?.until.toISOString()).toBe("2026-03-31T07:00:00.000Z");
    const [hour] = waitTimes(new Date("2026-03-28T20:00:00Z"), "Europe/Berlin");
    expect(hour?.until.toISOString()).toBe("2026-03-28T21:00:00.000Z");
  });

  it("take tomorrow from the person's day, not from the server's", () => {
    const [, , tomorrow] = waitTimes(new Date("2026-03-02T22:00:00Z"), "Pacific/Auckland");
    expect(tomorrow?.until.toISOString()).toBe("2026-03-03T20:00:00.000Z");
  });
});

describe("spans of time", () => {
  it.each([
    [40_000, "40 s"],
    [14 * 60_000, "14 min"],
    [125 * 60_000, "2 h 05 min"],
    [76 * 3_600_000, "3 d 4 h"],
  ])("of %i ms read %s", (ms, words) => {
    expect(spanWords(ms)).toBe(words);
  });
});

describe("moving in the ranked list", () => {
  const size = { rows: 100, columns: 4, page: 10 };
  const move = (key: string, place = { row: 50, column: 1 }, ctrlKey = false) =>
    moveInGrid(place, { key, ctrlKey }, size);

  it("goes by rows, columns and pages, and to the ends of row and list", () => {
    expect(move("ArrowDown")).toEqual({ row: 51, column: 1 });
    expect(move("ArrowLeft")).toEqual({ row: 50, column: 0 });
    expect(move("PageUp")).toEqual({ row: 40, column: 1 });
    expect(move("End")).toEqual({ row: 50, column: 3 });
    expect(move("Home", undefined, true)).toEqual({ row: 0, column: 0 });
    expect(move("End", undefined, true)).toEqual({ row: 99, column: 3 });
  });

  it("never leaves the list, also when it is empty", () => {
    expect(move("ArrowUp", { row: 0, column: 0 })).toEqual({ row: 0, column: 0 });
    expect(move("PageDown", { row: 95, column: 3 })).toEqual({ row: 99, column: 3 });
    expect(
      moveInGrid({ row: 0, column: 0 }, { key: "ArrowDown", ctrlKey: false }, { ...size, rows: 0 }),
    ).toEqual({
      row: 0,
      column: 0,
    });
  });

  it("leaves other keys alone", () => {
    expect(move("a")).toBeNull();
  });
});
