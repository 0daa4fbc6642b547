import { expect, test } from "vitest";
import { capacityCut, daysSpanned, type ScoredArrival } from "@/lib/policy/capacity-cut";

const start = Date.UTC(2026, 10, 2);
const hour = 3_600_000;
const day = 24 * hour;

/** Own construction: `count` times, one every `everyMs`. */
const times = (count: number, everyMs: number, from = start) =>
  Array.from({ length: count }, (_, i) => from + i * everyMs);
/** As many payments, with the logits 1, 2, … shuffled by a fixed stride. */
const spread = (count: number, everyMs: number): ScoredArrival[] =>
  times(count, everyMs).map((time, i) => ({ logit: ((i * 7919) % count) + 1, occurredAt: new Date(time) }));
const above = (arrivals: readonly ScoredArrival[], cut: number) =>
  arrivals.filter((arrival) => arrival.logit >= cut).length;

test("evenly spaced payments span exactly the time from first to last", () => {
  expect(daysSpanned(times(241, hour))).toBeCloseTo(10, 12);
  expect(daysSpanned(times(2401, hour / 10))).toBeCloseTo(10, 12);
});

test("a few payments that arrive months late do not stretch the span", () => {
  const late = times(10, 30 * day, start - 300 * day);
  expect(daysSpanned([...late, ...times(2401, hour / 10)])).toBeCloseTo(10, 0);
});

test("the pause between an old file and the live feed does not count as days of payments", () => {
  const both = [...times(1201, hour / 10, start - 2000 * day), ...times(1201, hour / 10)];
  expect(daysSpanned(both)).toBeCloseTo(10.5, 1);
});

test("the cut leaves the wished number of cases a day above it", () => {
  const arrivals = spread(2401, hour / 10);
  for (const perDay of [1, 7, 20, 100]) {
    expect(above(arrivals, capacityCut(arrivals, perDay)), `${perDay} a day`).toBe(perDay * 10);
  }
});

test("a burst counts as an hour, so that a minute's payments do not raise a day's cases", () => {
  expect(daysSpanned(times(600, 100))).toBeCloseTo(1 / 24, 12);
  const burst = spread(600, 100);
  expect(above(burst, capacityCut(burst, 240))).toBe(10);
});

test("equal scores stay on one side, the one with fewer cases", () => {
  const tied = spread(241, hour).map((arrival, i) => ({ ...arrival, logit: i < 5 ? 3 : i < 100 ? 2 : 1 }));
  expect(above(tied, capacityCut(tied, 5))).toBe(5);
  expect(above(tied, capacityCut(tied, 0.5))).toBe(5);
  const alike = tied.map((arrival) => ({ ...arrival, logit: -4.2 }));
  expect(above(alike, capacityCut(alike, 5))).toBe(0);
});

test("with fewer payments than wished cases everything is looked at", () => {
  const arrivals = spread(241, hour);
  expect(above(arrivals, capacityCut(arrivals, 1_000_000))).toBe(241);
});
