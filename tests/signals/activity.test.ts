import { describe, expect, it } from "vitest";
import { Activity } from "@/lib/signals/activity";

const payment = (atMs: number, id?: string) => ({
  atMs,
  amountBaseMinor: atMs,
  other: `other-${atMs}`,
  device: null,
  country: null,
  incoming: atMs % 2 === 1,
  id,
});

describe("the payments of one entity", () => {
  it("stand in order of time, whatever the order they come in, with all their columns in step", () => {
    const activity = new Activity();
    const times = [5, 1, 9, 3, 7, 2, 8, 4, 6, 0].flatMap((tens) => [tens * 10 + 1, tens * 10, tens * 10 + 2]);
    for (const atMs of times) activity.add(payment(atMs));
    const sorted = times.toSorted((a, b) => a - b);
    const read = activity.atMs;
    expect(read).toEqual(sorted);
    expect(activity.amountsBaseMinor).toEqual(sorted);
    expect(activity.others).toEqual(sorted.map((atMs) => `other-${atMs}`));
    expect(activity.incoming).toEqual(sorted.map((atMs) => atMs % 2 === 1));
  });

  it("are counted up to and with a moment", () => {
    const activity = new Activity();
    for (const atMs of [10, 20, 20, 30]) activity.add(payment(atMs));
    expect([5, 10, 20, 25, 40].map((atMs) => activity.endAt(atMs))).toEqual([0, 1, 3, 3, 4]);
  });

  it("of the same millisecond come before a stored payment by their identifier alone", () => {
    const activity = new Activity();
    for (const id of ["a", "b", "c"]) activity.add(payment(20, id));
    expect(activity.endBefore(20, "b")).toBe(1);
    expect(activity.endBefore(20, "z")).toBe(3);
    expect(activity.endBefore(19, "z")).toBe(0);
  });
});
