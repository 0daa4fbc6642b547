import { describe, expect, test } from "vitest";
import { summaryDue } from "@/lib/losses/summary-due";

const LONG_AGO = new Date("2026-01-01T00:00:00Z");
const mondayAt8 = (timeZone: string, subscribedAt = LONG_AGO) => ({
  weekday: 1,
  hour: 8,
  timeZone,
  subscribedAt,
});
const due = (morning: ReturnType<typeof mondayAt8>, now: string, zone = "UTC") =>
  summaryDue(morning, new Date(now), zone);

describe("when last week's summary is due", () => {
  test("from the chosen hour on the person's own clock", () => {
    expect(due(mondayAt8("Europe/Paris"), "2026-11-30T06:59:59.999Z")).toBeNull();
    expect(due(mondayAt8("Europe/Paris"), "2026-11-30T07:00:00Z")).toBe("2026-W48");
    expect(due(mondayAt8("America/New_York"), "2026-11-30T12:59:59Z")).toBeNull();
    expect(due(mondayAt8("America/New_York"), "2026-11-30T13:00:00Z")).toBe("2026-W48");
    // A quarter past: Chatham is 13 h 45 min ahead in its summer.
    expect(due({ ...mondayAt8("Pacific/Chatham"), weekday: 3 }, "2026-12-01T18:14:59Z")).toBeNull();
    expect(due({ ...mondayAt8("Pacific/Chatham"), weekday: 3 }, "2026-12-01T18:15:00Z")).toBe("2026-W48");
  });

  test("at the same hour of the wall clock before and after the clocks change", () => {
    expect(due(mondayAt8("Europe/Paris"), "2026-10-19T05:59:00Z")).toBeNull();
    expect(due(mondayAt8("Europe/Paris"), "2026-10-19T06:00:00Z")).toBe("2026-W42");
    expect(due(mondayAt8("Europe/Paris"), "2026-10-26T06:00:00Z")).toBeNull();
    expect(due(mondayAt8("Europe/Paris"), "2026-10-26T07:00:00Z")).toBe("2026-W43");
  });

  test("until the week is out, where no server ran that morning", () => {
    expect(due(mondayAt8("UTC"), "2026-12-06T23:59:59Z")).toBe("2026-W48");
    expect(due(mondayAt8("UTC"), "2026-12-07T07:59:59Z")).toBeNull();
    expect(due(mondayAt8("UTC"), "2026-12-07T08:00:00Z")).toBe("2026-W49");
  });

  test("for a day at least, where the chosen hour is among the last of the week", () => {
    const sundayAt23 = { ...mondayAt8("UTC"), weekday: 7, hour: 23 };
    expect(due(sundayAt23, "2026-12-06T22:59:59Z")).toBeNull();
    expect(due(sundayAt23, "2026-12-06T23:00:00Z")).toBe("2026-W48");
    expect(due(sundayAt23, "2026-12-07T00:00:00Z")).toBe("2026-W48");
    expect(due(sundayAt23, "2026-12-07T22:59:59Z")).toBe("2026-W48");
    expect(due(sundayAt23, "2026-12-07T23:00:00Z")).toBeNull();
    const late = { ...sundayAt23, subscribedAt: new Date("2026-12-06T23:00:01Z") };
    expect(due(late, "2026-12-07T00:00:00Z")).toBeNull();
  });

  test("never before the week is over where it is reckoned", () => {
    // Monday 08:00 in Auckland is Sunday 19:00 in UTC.
    expect(due(mondayAt8("Pacific/Auckland"), "2026-11-29T19:00:00Z")).toBeNull();
    expect(due(mondayAt8("Pacific/Auckland"), "2026-11-30T00:00:00Z")).toBe("2026-W48");
    expect(due(mondayAt8("Pacific/Auckland"), "2026-11-29T19:00:00Z", "Pacific/Auckland")).toBe("2026-W48");
  });

  test("not for mornings before the person was put on the list", () => {
    const late = mondayAt8("UTC", new Date("2026-11-30T08:00:01Z"));
    expect(due(late, "2026-12-01T12:00:00Z")).toBeNull();
    expect(due(late, "2026-12-07T08:00:00Z")).toBe("2026-W49");
    const inTime = mondayAt8("UTC", new Date("2026-11-30T08:00:00Z"));
    expect(due(inTime, "2026-11-30T08:00:00Z")).toBe("2026-W48");
  });

  test("across the turn of a year of 53 weeks", () => {
    expect(due(mondayAt8("UTC"), "2027-01-04T08:00:00Z")).toBe("2026-W53");
  });
});
