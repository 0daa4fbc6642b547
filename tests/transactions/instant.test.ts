import { describe, expect, it } from "vitest";
import { parseInstant } from "@/lib/transactions/instant";

describe("a time of RFC 3339", () => {
  // Examples of RFC 3339, section 5.8, with their epoch seconds.
  it.each([
    ["1985-04-12T23:20:50.52Z", 482196050.52],
    ["1996-12-19T16:39:57-08:00", 851042397],
    ["1937-01-01T12:00:27.87+00:20", Date.UTC(1937, 0, 1, 11, 40, 27, 870) / 1000],
    ["1990-12-31T23:59:60Z", Date.UTC(1991, 0, 1) / 1000],
    ["1990-12-31T15:59:60-08:00", Date.UTC(1991, 0, 1) / 1000],
    ["2024-02-29t00:00:00z", Date.UTC(2024, 1, 29) / 1000],
    ["2026-03-01T09:30:00.123456789Z", Date.UTC(2026, 2, 1, 9, 30, 0, 123) / 1000],
  ])("%s is read", (text, seconds) => {
    expect(parseInstant(text)).toBe(Math.round(seconds * 1000));
  });

  it.each([
    "1990-13-31T23:59:00Z",
    "1990-12-31T23:59:00",
    "1990-12-31 23:59:00Z",
    "1990-12-31",
    "1990-02-29T00:00:00Z",
    "2026-04-31T00:00:00Z",
    "1990-12-31T24:00:00Z",
    "1990-12-31T12:59:60Z",
    "1990-12-31T23:60:00Z",
    "1990-12-31T23:59:00+24:00",
    "1990-12-31T23:59:00+0100",
    "90-12-31T23:59:00Z",
    "now",
    "",
  ])("%s is none", (text) => {
    expect(parseInstant(text)).toBeNull();
  });
});
