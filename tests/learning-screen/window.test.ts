import { expect, test } from "vitest";
import { dayBefore, dayOf, windowOf } from "@/components/learning/window";

const ZONE = "Europe/Vienna";

test("days of the address are those of the person's calendar, the last one included", () => {
  expect(windowOf({ from: "2026-11-03", to: "2026-11-30" }, ZONE)).toEqual({
    from: "2026-11-02T23:00:00.000Z",
    to: "2026-11-30T23:00:00.000Z",
    unreadable: [],
  });
});

test("the day on which the clocks change has 25 hours", () => {
  const { from, to } = windowOf({ from: "2026-10-25", to: "2026-10-25" }, ZONE);
  expect((Date.parse(to as string) - Date.parse(from as string)) / 3_600_000).toBe(25);
});

test("an instant is taken as it is", () => {
  const at = "2026-11-20T09:30:00.000Z";
  expect(windowOf({ from: at, to: null }, ZONE)).toEqual({ from: at, unreadable: [] });
  expect(dayOf(at, ZONE)).toBe("2026-11-20");
});

test("what is no day and no instant is named and left open", () => {
  expect(windowOf({ from: "yesterday", to: "2026-02-30" }, ZONE)).toEqual({ unreadable: ["from", "to"] });
  expect(windowOf({ from: "2026-13-01T00:00:00Z", to: "" }, ZONE)).toEqual({ unreadable: ["from"] });
});

test("a number of days back is reckoned in the person's calendar", () => {
  expect(dayBefore(Date.parse("2026-12-01T23:30:00Z"), 30, ZONE)).toBe("2026-11-02");
  expect(dayBefore(Date.parse("2026-12-01T23:30:00Z"), 30, "UTC")).toBe("2026-11-01");
});
