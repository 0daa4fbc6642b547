import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { countHandOut, type Share, type ShareCount, sharesDue } from "@/lib/cases/shares";

const terms = { overdueEvery: 5, sampleEvery: 20 };

/** Hands out as `next` does: the first share due that has a case, else none. */
function handOut(
  rounds: number,
  has: (share: Share, round: number) => boolean,
  by = terms,
): (Share | null)[] {
  let count: ShareCount = { sinceOverdue: 0, sinceSample: 0 };
  return Array.from({ length: rounds }, (_, index) => {
    const share = sharesDue(count, by).find((due) => has(due, index + 1)) ?? null;
    count = countHandOut(count, by, share);
    return share;
  });
}

const countOf = (served: (Share | null)[], share: Share) => served.filter((one) => one === share).length;

describe("over two hundred hand-outs", () => {
  test("every fifth is overdue and every twentieth a sample, one of them a turn late where both fall together", () => {
    const served = handOut(200, () => true);
    expect(countOf(served, "overdue")).toBe(39);
    expect(countOf(served, "sample")).toBe(10);
    expect(served[4]).toBe("overdue");
    expect(served[19]).toBe("sample");
    expect(served[20]).toBe("overdue");
    expect(served[24]).toBe("overdue");
    // The fortieth overdue turn is the two-hundredth hand-out, which is a sample's too: it comes next.
    expect(
      countOf(
        handOut(201, () => true),
        "overdue",
      ),
    ).toBe(40);
  });

  test("a share without a case costs nobody a turn and is not made up for in a row", () => {
    const served = handOut(200, (share, round) => share === "overdue" && round > 102);
    expect(countOf(served, "sample")).toBe(0);
    expect(served.slice(0, 102).every((share) => share === null)).toBe(true);
    expect(served[102]).toBe("overdue");
    expect(served.slice(103, 110)).toEqual([null, "overdue", null, null, null, null, "overdue"]);
  });
});

test("whatever the terms, each share gets its turns to within one round", () => {
  fc.assert(
    fc.property(
      fc.integer({ min: 2, max: 30 }),
      fc.integer({ min: 2, max: 30 }),
      (overdueEvery, sampleEvery) => {
        const rounds = 600;
        const served = handOut(rounds, () => true, { overdueEvery, sampleEvery });
        expect(countOf(served, "sample")).toBe(Math.floor(rounds / sampleEvery));
        const due = Math.floor(rounds / overdueEvery);
        // Every second case a sample and every second overdue leaves no room to be late in.
        const room = Math.min(due, rounds - countOf(served, "sample"));
        expect(countOf(served, "overdue")).toBeGreaterThanOrEqual(room - 1);
        expect(countOf(served, "overdue")).toBeLessThanOrEqual(due);
      },
    ),
  );
});
