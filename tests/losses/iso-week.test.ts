import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { isWeek, shiftWeek, weekInterval, weekOf } from "@/lib/losses/iso-week";

const hours = (week: string, timeZone: string) => {
  const { start, end } = weekInterval(week, timeZone);
  return (end.getTime() - start.getTime()) / 3_600_000;
};

describe("ISO 8601 weeks: week 1 holds the first Thursday, the label carries the week-year", () => {
  // Dates around the turn of the year, by the rule of ISO 8601; they agree with GNU date's %G-W%V.
  test.each([
    ["2005-01-01", "2004-W53"],
    ["2005-01-02", "2004-W53"],
    ["2005-12-31", "2005-W52"],
    ["2006-01-01", "2005-W52"],
    ["2007-01-01", "2007-W01"],
    ["2007-12-31", "2008-W01"],
    ["2008-12-28", "2008-W52"],
    ["2008-12-29", "2009-W01"],
    ["2020-12-31", "2020-W53"],
    ["2021-01-03", "2020-W53"],
    ["2024-12-30", "2025-W01"],
    ["2025-12-29", "2026-W01"],
    ["2026-12-28", "2026-W53"],
    ["2027-01-04", "2027-W01"],
  ])("%s lies in %s", (day, week) => {
    expect(weekOf(new Date(`${day}T12:00:00Z`), "UTC")).toBe(week);
  });

  test("only the years that ISO 8601 gives 53 weeks have a week 53", () => {
    const long = [];
    for (let year = 2000; year <= 2060; year++) if (isWeek(`${year}-W53`)) long.push(year);
    expect(long).toEqual([2004, 2009, 2015, 2020, 2026, 2032, 2037, 2043, 2048, 2054, 2060]);
    let in400 = 0;
    for (let year = 2000; year < 2400; year++) if (isWeek(`${year}-W53`)) in400++;
    expect(in400).toBe(71);
  });

  test("week 1 begins on its Monday", () => {
    const mondays = [2024, 2025, 2026, 2027, 2028, 2029, 2030, 2031, 2032, 2033].map((year) =>
      weekInterval(`${year}-W01`, "UTC").start.toISOString().slice(0, 10),
    );
    expect(mondays).toEqual([
      "2024-01-01",
      "2024-12-30",
      "2025-12-29",
      "2027-01-04",
      "2028-01-03",
      "2029-01-01",
      "2029-12-31",
      "2030-12-30",
      "2031-12-29",
      "2033-01-03",
    ]);
  });

  test("the week before W01 may be a W53, and the one after W53 is W01 of the next week-year", () => {
    expect(shiftWeek("2027-W01", -1)).toBe("2026-W53");
    expect(shiftWeek("2026-W53", 1)).toBe("2027-W01");
    expect(shiftWeek("2026-W01", -1)).toBe("2025-W52");
  });

  test.each(["2025-W53", "2026-W00", "2026-W54", "2026-W1", "2026W01", "26-W01", "", "0000-W01"])(
    "%j is no week",
    (text) => {
      expect(isWeek(text)).toBe(false);
      expect(() => weekInterval(text, "UTC")).toThrow(RangeError);
    },
  );
});

describe("local weeks", () => {
  test("the zone decides which week an instant near midnight belongs to", () => {
    const instant = new Date("2026-01-04T23:30:00Z");
    expect(weekOf(instant, "UTC")).toBe("2026-W01");
    expect(weekOf(instant, "America/New_York")).toBe("2026-W01");
    expect(weekOf(instant, "Europe/Paris")).toBe("2026-W02");
  });

  // Clock changes of 2026 in the IANA time zone database.
  test.each([
    ["2026-W13", "Europe/Paris", 167],
    ["2026-W43", "Europe/Paris", 169],
    ["2026-W10", "America/New_York", 167],
    ["2026-W44", "America/New_York", 169],
    ["2026-W20", "Europe/Paris", 168],
  ])("%s in %s has %i hours", (week, timeZone, expected) => {
    expect(hours(week, timeZone)).toBe(expected);
  });

  test("a week begins on Monday 00:00 of the wall clock", () => {
    expect(weekInterval("2026-W13", "Europe/Paris").start).toEqual(new Date("2026-03-22T23:00:00Z"));
    expect(weekInterval("2026-W13", "Europe/Paris").end).toEqual(new Date("2026-03-29T22:00:00Z"));
  });

  test("every instant lies in exactly one week, and weeks join without a gap", () => {
    const zones = ["UTC", "Europe/Paris", "America/New_York", "Pacific/Chatham", "Asia/Kathmandu"];
    fc.assert(
      fc.property(
        fc.date({ min: new Date("1990-01-01"), max: new Date("2060-01-01"), noInvalidDate: true }),
        fc.constantFrom(...zones),
        (instant, timeZone) => {
          const week = weekOf(instant, timeZone);
          const { start, end } = weekInterval(week, timeZone);
          expect(start.getTime()).toBeLessThanOrEqual(instant.getTime());
          expect(instant.getTime()).toBeLessThan(end.getTime());
          expect(weekInterval(shiftWeek(week, 1), timeZone).start).toEqual(end);
          expect(shiftWeek(shiftWeek(week, 1), -1)).toBe(week);
        },
      ),
    );
  });
});
