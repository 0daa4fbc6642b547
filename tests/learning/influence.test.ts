import { eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { createDatabase } from "@/db/client";
import { influenceRuns } from "@/db/schema/learning";
import { casesChanged } from "@/lib/cases/notify";
import { stopRanking } from "@/lib/cases/ranking/ranking";
import type { PersonActor } from "@/lib/context";
import { natsToDecibans } from "@/lib/decibans";
import { correctDecision } from "@/lib/decisions/correct";
import { decideCase } from "@/lib/decisions/decide";
import { undoDecision } from "@/lib/decisions/undo";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { readInfluence } from "@/lib/learning/influence";
import { claimRun, endRun, renewRun } from "@/lib/learning/influence-run";
import { InfluenceView } from "@/lib/learning/influence-schema";
import { previewRemoval } from "@/lib/learning/preview-removal";
import { createScorer, type Label } from "@/lib/scorer";
import { CATALOGUE_SPANS } from "@/lib/signals/what-would-change";
import { sendOutcome } from "../outcomes/payments";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

let world: World;
let ann: PersonActor;
let ben: PersonActor;
let supervisor: PersonActor;
let riskManager: PersonActor;
let made: WaitingCase[];
let minutes = 0;

const later = () => {
  minutes += 1;
  return new Date(WORLD_START.getTime() + minutes * 60_000);
};

async function decide(who: PersonActor, on: WaitingCase | undefined, fraudulent: boolean): Promise<void> {
  await decideCase(world.ctx(who, later()), {
    id: on?.caseId as string,
    verdict: fraudulent ? "fraudulent" : "legitimate",
    typology: fraudulent ? "details_theft" : null,
    confidence: "sure",
    seenVersion: 1,
    scoreWasHidden: false,
    together: [],
  });
}

/** Labels in force in order, as told here and not by the product: who gave them. */
let lived: {
  who: "ann" | "ben" | "supervisor" | null;
  vector: Float64Array;
  label: Label;
  /** What another had found before, which holds again without this finding. */
  before?: Label;
}[];

beforeAll(async () => {
  world = await testWorld();
  [ann, ben] = [await world.person("reviewer"), await world.person("reviewer")];
  supervisor = await world.person("supervisor");
  riskManager = await world.person("risk_manager");
  made = await world.waitingCases(40, { seed: 31 });
  casesChanged(made.map(({ caseId }) => caseId));
  lived = [];
  for (const [n, on] of made.slice(0, 20).entries()) {
    const byAnn = n % 4 !== 3;
    const fraudulent = n % 3 === 0;
    await decide(byAnn ? ann : ben, on, fraudulent);
    lived.push({ who: byAnn ? "ann" : "ben", vector: on.vector, label: fraudulent ? 1 : -1 });
  }
  // The twentieth, Ben's, is taken back; one of Ann's is corrected, one overturned by a chargeback.
  await undoDecision(world.ctx(ben, later()), { id: made[19]?.caseId as string });
  lived.pop();
  await correctDecision(world.ctx(supervisor, later()), {
    id: made[1]?.caseId as string,
    verdict: "fraudulent",
    typology: "other",
    reason: "The customer called",
  });
  Object.assign(lived[1] as object, { who: "supervisor", label: 1, before: -1 });
  await sendOutcome(world, made[2] as WaitingCase);
  Object.assign(lived[2] as object, { who: null, label: 1 });
  return () => stopRanking(world.db);
});

async function learned(without: "ann" | "ben" | "supervisor" | "nobody") {
  const { scorer } = await readScorerInUse(world.db);
  const clean = createScorer(scorer.options);
  for (const { who, vector, label, before } of lived) {
    const holds = who === without ? before : label;
    if (holds) clean.learn(vector, holds);
  }
  return clean;
}

const ready = async (): Promise<InfluenceView> => {
  const view = await readInfluence(world.ctx(riskManager));
  expect(view.state).toBe("ready");
  return view;
};

describe("a person's influence on the scorer", () => {
  test("is listed with the labels in force, those with most first, and what became of those given", async () => {
    const view = await ready();
    expect(InfluenceView.parse(view)).toEqual(view);
    expect(view.people.map(({ person, labels }) => [person.id, labels])).toEqual([
      [ann.personId, 13],
      [ben.personId, 4],
      [supervisor.personId, 1],
    ]);
    const [of] = view.people;
    expect(of?.person.name).toBe(ann.name);
    expect(of?.fraudulent).toBe(5);
    expect(of?.corrected).toMatchObject({ count: 1, n: 15, value: 1 / 15 });
    expect(of?.overturned).toMatchObject({ count: 1, n: 15 });
    // Taken back by himself is neither given nor corrected.
    expect(view.people[1]?.corrected).toMatchObject({ count: 0, n: 4, low: 0 });
    expect(of?.firstAt).toBe(new Date(WORLD_START.getTime() + 60_000).toISOString());
  });

  test("is exact: the log folded without their labels", async () => {
    const view = await ready();
    const now = (await readScorerInUse(world.db)).scorer;
    const whole = (await learned("nobody")).snapshot();
    expect(Buffer.from(whole).equals(Buffer.from(now.snapshot()))).toBe(true);
    const waiting = made.slice(19).map(({ vector }) => vector);
    for (const [at, who] of (["ann", "ben", "supervisor"] as const).entries()) {
      const { effect } = view.people[at] ?? {};
      const then = await learned(who);
      const gap = then.weights().map((weight, i) => weight - (now.weights()[i] as number));
      expect(effect?.weightDistance).toBeCloseTo(Math.hypot(...gap), 12);
      const changes = waiting.map((x) => natsToDecibans(Math.abs(then.score(x).logit - now.score(x).logit)));
      expect(effect?.largestDecibans).toBeCloseTo(Math.max(...changes), 9);
      expect(effect?.meanDecibans).toBeCloseTo(
        changes.reduce((sum, one) => sum + one, 0) / changes.length,
        9,
      );
      const byDistance = CATALOGUE_SPANS.map(({ key, from, to }) => ({
        key,
        distance: Math.hypot(...gap.subarray(from, to)),
      })).sort((a, b) => b.distance - a.distance);
      expect(effect?.signals.map(({ key }) => key)).toEqual(byDistance.slice(0, 3).map(({ key }) => key));
    }
    expect(view.payments).toEqual({ of: "waiting", count: waiting.length });
  });

  test("is to the last bit what a preview of their labels' removal says", async () => {
    for (const { person, effect } of (await ready()).people) {
      const preview = await previewRemoval(world.ctx(riskManager), { personId: person.id });
      expect(preview.effect).toEqual(effect);
    }
  });

  test("stands beside the most that one label can do, and how long the weights are", async () => {
    const { bound, weights } = await ready();
    // R/(2·lambda)·√(1 + kappa·R²/(8·lambda)) with R = 4, lambda = 1/2, kappa = 1/4.
    expect(bound.distance).toBeCloseTo(4 * Math.SQRT2, 12);
    const { scorer } = await readScorerInUse(world.db);
    expect(weights).toEqual({ length: expect.closeTo(Math.hypot(...scorer.weights()), 12), bound: 16 });
  });

  test("is reckoned once for a row of the log, however many ask", async () => {
    const runs = async () => (await world.db.select().from(influenceRuns)).map(({ id }) => id);
    await ready();
    const before = await runs();
    await Promise.all(Array.from({ length: 5 }, ready));
    expect(await runs()).toEqual(before);
  });

  test("is shown as it last was while it is reckoned anew, by another server or after a rest", async () => {
    const before = await ready();
    await decide(ann, made[20], true);
    const held = await readScorerInUse(world.db);
    const other = createDatabase(world.url);
    const claimed = await claimRun(other.db, held, WORLD_START);
    expect(claimed).not.toBeNull();
    expect(await claimRun(world.db, held, WORLD_START)).toBeNull();
    const meanwhile = await readInfluence(world.ctx(riskManager));
    expect(meanwhile).toMatchObject({ state: "pending", asOfSeq: before.logSeq, people: before.people });
    expect(meanwhile.logSeq).toBe(before.logSeq + 1);
    await endRun(other.db, claimed as number, null, WORLD_START);
    await other.close();
    expect((await ready()).people[0]?.labels).toBe(14);
  });

  test("is taken over from a server that is gone, which then may not write any more", async () => {
    await decide(ann, made[21], true);
    const held = await readScorerInUse(world.db);
    const gone = (await claimRun(world.db, held, WORLD_START)) as number;
    const muchLater = new Date(WORLD_START.getTime() + 3_600_000);
    const view = await readInfluence(world.ctx(riskManager, muchLater));
    expect(view.state).toBe("ready");
    expect(await renewRun(world.db, gone, muchLater)).toBe(false);
    const stale = { payments: { of: "waiting" as const, count: 0 }, people: [] };
    await endRun(world.db, gone, stale, muchLater);
    const rows = await world.db.select().from(influenceRuns).where(eq(influenceRuns.state, "done"));
    expect(rows).toHaveLength(1);
    expect((await readInfluence(world.ctx(riskManager, muchLater))).people[0]?.labels).toBe(15);
  });

  test("is for those who may look at the scorer", async () => {
    await expect(readInfluence(world.ctx(ann))).rejects.toMatchObject({ code: "forbidden" });
    const auditor = await world.person("auditor");
    expect((await readInfluence(world.ctx(auditor))).people.length).toBeGreaterThan(0);
  });
});

test("an installation without labels has nobody to list, and says so at once", async () => {
  const empty = await testWorld();
  const manager = await empty.person("risk_manager");
  const view = await readInfluence(empty.ctx(manager));
  expect(view).toMatchObject({
    state: "ready",
    people: [],
    asOfSeq: 0,
    payments: { of: "newest", count: 0 },
  });
  await empty.close();
});
