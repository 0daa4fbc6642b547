import { expect, test } from "vitest";
import { capacityCut, daysSpanned, type ScoredArrival } from "@/lib/policy/capacity-cut";

const start = Date.UTC(2026, 10, 2);
const hour = 3_600_000;

/** Own construction: `count` payments, one every `everyMs`, with the logits 1, 2, … shuffled by a fixed stride. */
function spread(count: number, everyMs: number): ScoredArrival[] {
  return Array.from({ length: count }, (_, i) => ({
    logit: ((i * 7919) % count) + 1,
    occurredAt: new Date(start + i * everyMs),
  }));
}
const above = (arrivals: readonly ScoredArrival[], cut: number) =>
  arrivals.filter((arrival) => arrival.logit >= cut).length;

test("evenly spaced payments span exactly the time from first to last", () => {
  expect(daysSpanned(spread(241, hour))).toBeCloseTo(10, 12);
  expect(daysSpanned(spread(2401, hour / 10))).toBeCloseTo(10, 12);
});

test("the cut leaves the wished number of cases a day above it", () => {
  const arrivals = spread(2401, hour / 10);
  for (const perDay of [1, 7, 20, 100]) {
    expect(above(arrivals, capacityCut(arrivals, perDay)), `${perDay} a day`).toBe(perDay * 10);
  }
});

test("a few payments that arrive months late do not stretch the span", () => {
  const arrivals = spread(2401, hour / 10);
  const late = Array.from({ length: 10 }, (_, i) => ({
    logit: 0,
    occurredAt: new Date(start - (i + 1) * 30 * 24 * hour),
  }));
  expect(daysSpanned([...arrivals, ...late])).toBeCloseTo(10, 0);
});

test("the pause between an old file and the live feed does not count as days of payments", () => {
  const old = spread(1200, hour / 10).map((arrival) => ({
    ...arrival,
    occurredAt: new Date(arrival.occurredAt.getTime() - 2000 * 24 * hour),
  }));
  expect(daysSpanned([...old, ...spread(1200, hour / 10)])).toBeCloseTo(10.5, 1);
});

test("a burst counts as an hour, so that a minute's payments do not raise a day's cases", () => {
  const burst = spread(600, 100);
  expect(daysSpanned(burst)).toBeCloseTo(1 / 24, 12);
  expect(above(burst, capacityCut(burst, 240))).toBe(10);
});

test("equal scores stay on one side, the one with fewer cases", () => {
  const arrivals = spread(241, hour).map((arrival, i) => ({
    ...arrival,
    logit: i < 5 ? 3 : i < 100 ? 2 : 1,
  }));
  expect(above(arrivals, capacityCut(arrivals, 5))).toBe(5);
  expect(above(arrivals, capacityCut(arrivals, 0.5))).toBe(5);
  const alike = arrivals.map((arrival) => ({ ...arrival, logit: -4.2 }));
  expect(above(alike, capacityCut(alike, 5))).toBe(0);
});

test("with fewer payments than wished cases everything is looked at", () => {
  const arrivals = spread(241, hour);
  expect(above(arrivals, capacityCut(arrivals, 1_000_000))).toBe(241);
});
