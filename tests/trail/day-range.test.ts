import { expect, test } from "vitest";
import { dayEnd, dayStart } from "@/components/trail/day-range";

// Zone rules of the IANA time zone database: on 29 March 2026 Oslo's clocks skip from 02:00 to 03:00.
test.each([
  ["2026-01-15", "Europe/Oslo", "2026-01-14T23:00:00.000Z", "2026-01-15T23:00:00.000Z"],
  ["2026-03-29", "Europe/Oslo", "2026-03-28T23:00:00.000Z", "2026-03-29T22:00:00.000Z"],
  ["2026-10-25", "Europe/Oslo", "2026-10-24T22:00:00.000Z", "2026-10-25T23:00:00.000Z"],
  ["2026-07-01", "Asia/Kathmandu", "2026-06-30T18:15:00.000Z", "2026-07-01T18:15:00.000Z"],
  ["2026-12-31", "UTC", "2026-12-31T00:00:00.000Z", "2027-01-01T00:00:00.000Z"],
])("%s in %s runs from %s to %s", (day, zone, start, end) => {
  expect(dayStart(day, zone)?.toISOString()).toBe(start);
  expect(dayEnd(day, zone)?.toISOString()).toBe(end);
});

test.each([undefined, "", "2026-02-30", "2026-13-01", "yesterday", "26-1-1"])("%j is no day", (day) => {
  expect(dayStart(day, "UTC")).toBeNull();
  expect(dayEnd(day, "UTC")).toBeNull();
});
