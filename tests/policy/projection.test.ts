import { expect, test } from "vitest";
import { logitOf, natsToDecibans } from "@/lib/decibans";
import { countAbove, lineFor, project } from "@/lib/policy/projection";
import { histogramOf, newestScores } from "@/lib/policy/recent-scores";
import { testDatabase } from "../support/database";
import { insertArrivals } from "./arrivals";

const { db } = await testDatabase();
const now = new Date("2026-11-12T00:00:00Z");
const day = 86_400_000;
const decibans = (value: number) => value / natsToDecibans(1);

/** Own construction: 1,000 payments over ten days, 890 at −20.2 decibans, 100 at −1.9 and 10 at +15.1. */
await insertArrivals(
  db,
  Array.from({ length: 1000 }, (_, i) => ({
    logit: decibans(i % 100 === 0 ? 15.1 : i % 10 === 5 ? -1.9 : -20.2),
    occurredAt: new Date(now.getTime() - 10 * day + (i * 10 * day) / 999),
    takenAt: new Date(now.getTime() - 3_600_000),
  })),
);
const since = new Date(now.getTime() - 14 * day);
const recent = await histogramOf(db, await newestScores(db, 200_000, since));

test("recent scores are counted in bins of half a deciban, over the days they span", () => {
  expect(recent).toEqual({
    count: 1000,
    days: expect.closeTo(10, 6),
    binDecibans: 0.5,
    bins: [
      { bin: -41, count: 890 },
      { bin: -4, count: 100 },
      { bin: 30, count: 10 },
    ],
  });
});

test("a fixed threshold's alerts a day are the scores above it over the days", () => {
  const terms = { reviewThreshold: { kind: "fixed" as const, probability: 0.5 }, holdThreshold: 0.9 };
  expect(project(terms, recent)).toEqual({
    reviewDecibans: 0,
    holdDecibans: natsToDecibans(logitOf(0.9)),
    alertsPerDay: expect.closeTo(1, 6),
    holdsPerDay: expect.closeTo(1, 6),
  });
  const low = project({ ...terms, reviewThreshold: { kind: "fixed", probability: 0.1 } }, recent);
  expect(low?.alertsPerDay).toBeCloseTo(11, 6);
});

test("a threshold by capacity gives the wished alerts a day, and the hold line lies on or above it", () => {
  for (const casesPerDay of [0.5, 5, 11, 50, 100]) {
    const projection = project(
      { reviewThreshold: { kind: "capacity", casesPerDay }, holdThreshold: 0.4 },
      recent,
    );
    expect(projection?.alertsPerDay).toBeCloseTo(casesPerDay, 6);
    expect(projection?.holdDecibans).toBeGreaterThanOrEqual(projection?.reviewDecibans ?? Number.NaN);
  }
});

test("more wished cases than payments puts the line beneath all of them", () => {
  expect(countAbove(recent, lineFor(recent, 5000))).toBe(1000);
});

test("nothing is projected from too few scores", async () => {
  const few = { ...recent, count: 199 };
  expect(
    project({ reviewThreshold: { kind: "fixed", probability: 0.5 }, holdThreshold: 0.9 }, few),
  ).toBeNull();
  const none = await histogramOf(db, await newestScores(db, 200_000, new Date(now.getTime() + day)));
  expect(none).toEqual({ count: 0, days: 0, binDecibans: 0.5, bins: [] });
});
