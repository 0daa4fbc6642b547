import { describe, expect, test } from "vitest";
import { deadlinesOf } from "@/lib/cases/deadlines";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";

const receivedAt = new Date("2026-05-04T10:00:00Z");
const minutes = (count: number) => new Date(receivedAt.getTime() + count * 60_000);
const terms = {
  ...DEFAULT_TERMS,
  deadlineMinutes: { review: 600, hold: 120, sample: 4_000 },
  lifetimeDays: 14,
};
const due = (
  kind: "alert" | "sample" | "sibling",
  zone: "pass" | "review" | "hold",
  holdExpiresAt: Date | null,
) => deadlinesOf({ kind, zone, receivedAt, holdExpiresAt }, terms).dueAt;

describe("a case is due", () => {
  test("by its zone, and a sample by its own term, from when the payment came in", () => {
    expect(due("alert", "review", null)).toEqual(minutes(600));
    expect(due("alert", "hold", null)).toEqual(minutes(120));
    expect(due("sample", "pass", null)).toEqual(minutes(4_000));
    expect(due("sibling", "pass", null)).toEqual(minutes(600));
  });

  test("five minutes before its hold ends, where that is sooner", () => {
    expect(due("alert", "hold", minutes(60))).toEqual(minutes(55));
    expect(due("alert", "hold", minutes(1_440))).toEqual(minutes(120));
  });

  test("half-way through a hold that is shorter than ten minutes", () => {
    expect(due("alert", "hold", minutes(6))).toEqual(minutes(3));
    expect(due("alert", "hold", minutes(0))).toEqual(receivedAt);
  });
});

test("a case's lifetime runs from when the payment came in", () => {
  const { lapsesAt } = deadlinesOf({ kind: "alert", zone: "review", receivedAt, holdExpiresAt: null }, terms);
  expect(lapsesAt).toEqual(minutes(14 * 24 * 60));
});
