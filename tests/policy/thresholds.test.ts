import { beforeEach, expect, test } from "vitest";
import { policyCuts } from "@/db/schema/policies";
import { logitOf } from "@/lib/decibans";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import type { PolicyInForce } from "@/lib/policy/read";
import type { PolicyTerms } from "@/lib/policy/schema";
import { refreshCut, thresholdsInForce } from "@/lib/policy/thresholds";
import { createScorer } from "@/lib/scorer";
import { testDatabase } from "../support/database";
import { insertArrivals } from "./arrivals";

const { db, pool } = await testDatabase();
const now = new Date("2026-11-12T00:00:00Z");
const later = (minutes: number) => new Date(now.getTime() + minutes * 60_000);

beforeEach(async () => {
  for (const table of ["policy_cuts", "scores", "transactions"]) await pool.query(`DELETE FROM ${table}`);
});

/** One coordinate, on which it puts some weight: a score is the arrival's logit times that weight. */
const scorer = createScorer({ method: "gradient", dimension: 1, featureBound: 1e8 });
scorer.learn(Float64Array.of(1e6), 1);
const weight = scorer.weights()[0] as number;
/** Vectors of one number each. */
const signals = { version: 1, catalogueVersion: 1, dimension: 1, own: [] };
const held = { scorer, signals, version: 1 };

function policy(version: number, terms: Partial<PolicyTerms>): PolicyInForce {
  return { version, terms: { ...DEFAULT_TERMS, ...terms }, effectiveAt: now };
}
const byCapacity = policy(2, { reviewThreshold: { kind: "capacity", casesPerDay: 50 }, holdThreshold: 0.5 });

/** Ten days of 100 payments a day, each with its own score between logit 0 and 1000. */
const tenDays = (takenAt: Date, shift = 0) =>
  Array.from({ length: 1001 }, (_, i) => ({
    logit: ((i * 7919) % 1001) + shift,
    occurredAt: new Date(now.getTime() - 10 * 86_400_000 + i * 864_000),
    takenAt,
  }));

test("a fixed threshold is the log-odds of its probability, and the hold line never lies below it", async () => {
  const fixed = policy(2, { reviewThreshold: { kind: "fixed", probability: 0.2 }, holdThreshold: 0.9 });
  const lines = { reviewLogit: logitOf(0.2), holdLogit: logitOf(0.9) };
  expect(await thresholdsInForce(db, fixed, now)).toEqual(lines);
  expect(await refreshCut(db, fixed, now, held)).toEqual(lines);
  const crossed = policy(3, { reviewThreshold: { kind: "fixed", probability: 0.6 }, holdThreshold: 0.5 });
  expect((await thresholdsInForce(db, crossed, now)).holdLogit).toBe(logitOf(0.6));
});

test("without scores the review line lies at even odds, and nothing is stored", async () => {
  expect(await thresholdsInForce(db, byCapacity, now)).toEqual({ reviewLogit: 0, holdLogit: 0 });
  expect(await refreshCut(db, byCapacity, now, held, tenDays(now).slice(0, 199))).toEqual({
    reviewLogit: 0,
    holdLogit: 0,
  });
  expect(await db.select().from(policyCuts)).toEqual([]);
});

test("a first batch of some size stands in for the scores that are not there yet", async () => {
  const batch = tenDays(now);
  const { reviewLogit, holdLogit } = await refreshCut(db, byCapacity, now, held, batch);
  expect(batch.filter((item) => item.logit >= reviewLogit)).toHaveLength(500);
  expect(holdLogit).toBe(reviewLogit);
  expect(await thresholdsInForce(db, byCapacity, later(1))).toEqual({ reviewLogit, holdLogit });
});

test("the cut on stored scores yields the wished cases a day", async () => {
  await insertArrivals(db, tenDays(now));
  const before = await thresholdsInForce(db, byCapacity, now);
  expect(before.reviewLogit).toBeCloseTo(500.5, 9);
  // The scorer as it is now is less sure of everything; the same payments lie above its line.
  const { reviewLogit } = await refreshCut(db, byCapacity, now, held);
  expect(reviewLogit).toBeCloseTo(500.5 * weight, 9);
  expect(await db.select().from(policyCuts)).toMatchObject([
    { policyVersion: 2, scoreCount: 1001, computedAt: now },
  ]);
});

test("scores that the scorer in use gave itself are taken as they are", async () => {
  await insertArrivals(db, tenDays(now));
  const { reviewLogit } = await refreshCut(db, byCapacity, now, { scorer, signals, version: 0 });
  expect(reviewLogit).toBeCloseTo(500.5, 9);
});

test("a cut is kept for ten minutes or a thousand arrivals, and each policy has its own", async () => {
  await insertArrivals(db, tenDays(now));
  const first = await refreshCut(db, byCapacity, now, held);
  await insertArrivals(db, tenDays(later(1), 2000).slice(0, 999));
  expect(await refreshCut(db, byCapacity, later(9), held)).toEqual(first);
  const aged = await refreshCut(db, byCapacity, later(10), held);
  expect(aged.reviewLogit).toBeGreaterThan(first.reviewLogit);
  await insertArrivals(db, tenDays(later(11), 4000).slice(0, 1000));
  const counted = await refreshCut(db, byCapacity, later(11), held);
  expect(counted.reviewLogit).toBeGreaterThan(aged.reviewLogit);
  const other = policy(3, { reviewThreshold: { kind: "capacity", casesPerDay: 5 } });
  expect((await refreshCut(db, other, later(11), held)).reviewLogit).toBeGreaterThan(counted.reviewLogit);
  expect(await thresholdsInForce(db, byCapacity, later(9))).toEqual(first);
});

test("only the newest scores count, and a batch is in whole or not at all", async () => {
  await insertArrivals(db, tenDays(later(-600), 1_000_000));
  for (let i = 0; i < 20; i++) await insertArrivals(db, tenDays(later(i - 100)));
  await refreshCut(db, byCapacity, now, held);
  const [cut] = await db.select().from(policyCuts);
  expect(cut?.scoreCount).toBe(20 * 1001);
  expect(cut?.logit).toBeLessThan(1001);
});

test("two servers that take the cut in the same millisecond agree on one row", async () => {
  await insertArrivals(db, tenDays(now));
  const both = await Promise.all([
    refreshCut(db, byCapacity, now, held),
    refreshCut(db, byCapacity, now, held),
  ]);
  expect(both[0]).toEqual(both[1]);
  expect(await db.select().from(policyCuts)).toHaveLength(1);
});
