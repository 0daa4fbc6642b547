import { eq, inArray } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { createDatabase, type Database } from "@/db/client";
import { vectorToBytes } from "@/db/columns";
import { cases } from "@/db/schema/cases";
import { policies } from "@/db/schema/policies";
import { scorers } from "@/db/schema/scorers";
import { scores } from "@/db/schema/transactions";
import { casesChanged } from "@/lib/cases/notify";
import { RankingModel } from "@/lib/cases/ranking/model";
import { rankingOf, stopRanking } from "@/lib/cases/ranking/ranking";
import type { RankingView } from "@/lib/cases/ranking/view";
import type { PersonActor } from "@/lib/context";
import { natsToDecibans } from "@/lib/decibans";
import { correctDecision } from "@/lib/decisions/correct";
import { decideCase } from "@/lib/decisions/decide";
import type { DecideView } from "@/lib/decisions/schema";
import { undoDecision } from "@/lib/decisions/undo";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { createScorer } from "@/lib/scorer";
import { testWorld, type WaitingCase, type World } from "../support/world";

let world: World;
let reviewer: PersonActor;
let supervisor: PersonActor;
let other: { db: Database; close: () => Promise<void> };
const vectors = new Map<string, Float64Array>();
let seed = 1;

beforeAll(async () => {
  world = await testWorld();
  // A line that need not be worked out from the scores again and again.
  const terms = { ...DEFAULT_TERMS, reviewThreshold: { kind: "fixed" as const, probability: 0.1 } };
  await world.db.update(policies).set({ terms }).where(eq(policies.version, 1));
  reviewer = await world.person("reviewer");
  supervisor = await world.person("supervisor");
  other = createDatabase(world.url, 4);
  // What a decision moved is told by a ranking that was there before it.
  await read(rankingOf(world.db));
  return async () => {
    stopRanking(world.db);
    stopRanking(other.db);
    await other.close();
  };
});

/** As of the real clock: another server finds changes by their time. */
const now = () => new Date();
const ctx = (person: PersonActor) => world.ctx(person, now());

async function waitingCases(count: number): Promise<WaitingCase[]> {
  const made = await world.waitingCases(count, { seed: seed++, openedAt: now() });
  for (const { caseId, vector } of made) vectors.set(caseId, vector);
  casesChanged(made.map(({ caseId }) => caseId));
  return made;
}

const revisionOf = async (id: string) =>
  (await world.db.select({ revision: cases.revision }).from(cases).where(eq(cases.id, id)))[0]
    ?.revision as number;

async function decide(id: string, index: number): Promise<DecideView> {
  const fraudulent = index % 3 === 0;
  return decideCase(ctx(reviewer), {
    id,
    verdict: fraudulent ? "fraudulent" : "legitimate",
    typology: fraudulent ? "other" : null,
    confidence: "sure",
    seenVersion: await revisionOf(id),
    scoreWasHidden: false,
    together: [],
  });
}

const listOf = (view: RankingView) =>
  Array.from({ length: view.size }, (_, index) => ({
    caseId: view.caseAt(index).id,
    logit: view.logitAt(index),
    version: view.version,
  }));

const read = (model: RankingModel) => model.read(now(), listOf);

/** The waiting cases scored from nothing by the state in the database, best first. */
async function scoredAfresh(): Promise<{ caseId: string; logit: number; version: number }[]> {
  const { scorer, version } = await readScorerInUse(world.db);
  const rows = await world.db
    .select({ id: cases.id, number: cases.number })
    .from(cases)
    .where(inArray(cases.state, ["open", "claimed", "waiting", "escalated"]))
    .orderBy(cases.number);
  return rows
    .map(({ id }) => ({ caseId: id, logit: scorer.score(vectors.get(id) as Float64Array).logit, version }))
    .sort((a, b) => b.logit - a.logit);
}

/** Same cases, same log-odds to 1e-9, same order but for cases that differ by less than that. */
function expectSameRanking(
  got: Awaited<ReturnType<typeof read>>,
  wanted: Awaited<ReturnType<typeof scoredAfresh>>,
) {
  const wantedLogit = new Map(wanted.map(({ caseId, logit }) => [caseId, logit]));
  expect(new Set(got.map(({ caseId }) => caseId))).toEqual(new Set(wantedLogit.keys()));
  expect(got).toHaveLength(wanted.length);
  for (const [index, { caseId, logit, version }] of got.entries()) {
    expect(Math.abs(logit - (wantedLogit.get(caseId) as number))).toBeLessThan(1e-9);
    expect(Math.abs(logit - (wanted[index]?.logit as number))).toBeLessThan(1e-9);
    expect(version).toBe(wanted[index]?.version);
  }
}

async function converged(model: RankingModel): Promise<void> {
  const { version } = await readScorerInUse(world.db);
  const deadline = Date.now() + 60_000;
  while (model.version !== version) {
    if (Date.now() > deadline)
      throw new Error(`The other server stands at ${model.version}, not at ${version}`);
    await new Promise((resolve) => setTimeout(resolve, 20));
  }
}

// Hundreds of decisions through the database: slow on a busy machine, and nothing here is about time.
describe("the ranking in memory", { timeout: 240_000 }, () => {
  test("equals a scoring from nothing after hundreds of labels, here and on another server that follows", async () => {
    const here = rankingOf(world.db);
    const there = rankingOf(other.db);
    const waitedBefore = (await scoredAfresh()).length;
    const made = await waitingCases(400);
    expectSameRanking(await read(here), await scoredAfresh());
    await there.read(now(), () => undefined);
    for (let index = 0; index < 250; index++) {
      await decide(made[index]?.caseId as string, index);
      if (index % 50 === 25) await waitingCases(20);
    }
    const wanted = await scoredAfresh();
    expect(wanted).toHaveLength(waitedBefore + 400 - 250 + 100);
    expectSameRanking(await read(here), wanted);
    await converged(there);
    await there.catchUp([], true);
    expectSameRanking(await read(there), wanted);
  });

  test("equals it again after an undo and a correction, here and there", async () => {
    const [first, second] = (await waitingCases(2)) as [WaitingCase, WaitingCase];
    await decide(first.caseId, 0);
    const answer = await decide(second.caseId, 1);
    const undone = await undoDecision(ctx(reviewer), { id: second.caseId });
    expect(undone.scorerVersion).toBe(answer.scorerVersion + 1);
    expect(undone.moved).not.toBeNull();
    expectSameRanking(await read(rankingOf(world.db)), await scoredAfresh());
    await correctDecision(ctx(supervisor), {
      id: first.caseId,
      verdict: "legitimate",
      typology: null,
      reason: "The customer called back",
    });
    const wanted = await scoredAfresh();
    expectSameRanking(await read(rankingOf(world.db)), wanted);
    await converged(rankingOf(other.db));
    await rankingOf(other.db).catchUp([], true);
    expectSameRanking(await read(rankingOf(other.db)), wanted);
  });

  test("is whole to its readers while it is computed anew", async () => {
    const made = await waitingCases(1_500);
    const behind = new RankingModel(other.db);
    const before = await read(behind);
    for (const { caseId } of made.slice(0, 3)) await decide(caseId, 1);
    await undoDecision(ctx(reviewer), { id: made[2]?.caseId as string });
    let running = true;
    const caughtUp = behind.catchUp([], true).finally(() => {
      running = false;
    });
    let reads = 0;
    while (running) {
      const list = await read(behind);
      const logits = list.map(({ logit }) => logit);
      expect(logits).toEqual(logits.toSorted((a, b) => b - a));
      expect([before.length, before.length - 2]).toContain(list.length);
      expect(list.every(({ caseId }) => caseId.length === 36)).toBe(true);
      reads += 1;
      await new Promise((resolve) => setImmediate(resolve));
    }
    await caughtUp;
    expect(reads).toBeGreaterThan(1);
    expectSameRanking(await read(behind), await scoredAfresh());
  });

  test("is loaded as it stands by a server that starts late", async () => {
    const late = new RankingModel(other.db);
    expectSameRanking(await read(late), await scoredAfresh());
  });

  test("keeps up with people who decide at once", async () => {
    const made = await waitingCases(40);
    const people = await Promise.all(Array.from({ length: 10 }, () => world.person("reviewer")));
    const answers = await Promise.all(
      made.slice(0, 30).map(async ({ caseId }, index) =>
        decideCase(ctx(people[index % 10] as PersonActor), {
          id: caseId,
          verdict: "legitimate",
          typology: null,
          confidence: "sure",
          seenVersion: 1,
          scoreWasHidden: false,
          together: [],
        }),
      ),
    );
    for (const { moved } of answers) expect(moved).not.toBeNull();
    expect(new Set(answers.map(({ scorerVersion }) => scorerVersion)).size).toBe(30);
    expectSameRanking(await read(rankingOf(world.db)), await scoredAfresh());
  });

  test("is computed anew when the scorer is given other options", async () => {
    const held = await readScorerInUse(world.db);
    const fresh = createScorer({ ...held.scorer.options, offset: -2 });
    await world.db
      .update(scorers)
      .set({ state: Buffer.from(fresh.snapshot()), version: held.version + 1, options: { ...fresh.options } })
      .where(eq(scorers.id, held.id));
    await rankingOf(world.db).catchUp();
    expectSameRanking(await read(rankingOf(world.db)), await scoredAfresh());
    await world.db
      .update(scorers)
      .set({
        state: Buffer.from(held.scorer.snapshot()),
        version: held.version + 2,
        options: { ...held.scorer.options },
      })
      .where(eq(scorers.id, held.id));
    await rankingOf(world.db).catchUp();
    expectSameRanking(await read(rankingOf(world.db)), await scoredAfresh());
  });
});

describe("what a decision moved", () => {
  test("is counted over the cases that still wait: up, down and across the hold line", async () => {
    const made = await waitingCases(60);
    const before = new Map((await scoredAfresh()).map(({ caseId, logit }) => [caseId, logit]));
    const holdLogit = await rankingOf(world.db).read(now(), (view) => view.thresholds.holdLogit);
    const answer = await decide(made[0]?.caseId as string, 0);
    const wanted = { up: 0, down: 0, aboveHoldLine: 0, belowHoldLine: 0 };
    for (const { caseId, logit } of await scoredAfresh()) {
      const was = before.get(caseId) as number;
      if (natsToDecibans(logit - was) >= 1) wanted.up += 1;
      if (natsToDecibans(was - logit) >= 1) wanted.down += 1;
      if (was < holdLogit && logit >= holdLogit) wanted.aboveHoldLine += 1;
      if (was >= holdLogit && logit < holdLogit) wanted.belowHoldLine += 1;
    }
    expect(wanted.up + wanted.down).toBeGreaterThan(0);
    expect(answer.moved).toEqual(wanted);
  });

  test("is nothing where the verdict is no label, and the case is gone at once", async () => {
    const [one] = (await waitingCases(1)) as [WaitingCase];
    const answer = await decideCase(ctx(reviewer), {
      id: one.caseId,
      verdict: "customer_misuse",
      typology: null,
      confidence: "sure",
      seenVersion: 1,
      scoreWasHidden: false,
      together: [],
    });
    expect(answer.moved).toEqual({ up: 0, down: 0, aboveHoldLine: 0, belowHoldLine: 0 });
    expect((await read(rankingOf(world.db))).some(({ caseId }) => caseId === one.caseId)).toBe(false);
    expect(answer.next?.caseId).not.toBe(one.caseId);
  });
});

test("a case whose vector was refreshed takes its new place, its revision unchanged", async () => {
  const [one] = (await waitingCases(1)) as [WaitingCase];
  const fresh = Float64Array.from(one.vector, (value, index) => (index % 4 === 0 ? -value : value));
  const [old] = await world.db.select().from(scores).where(eq(scores.id, one.scoreId));
  const { id: _, ...rest } = old as typeof scores.$inferSelect;
  const [inserted] = await world.db
    .insert(scores)
    .values({ ...rest, kind: "refresh", vector: vectorToBytes(fresh) })
    .$returningId();
  await world.db
    .update(cases)
    .set({ scoreId: inserted?.id as number, changedAt: now() })
    .where(eq(cases.id, one.caseId));
  vectors.set(one.caseId, fresh);
  casesChanged([one.caseId]);
  expectSameRanking(await read(rankingOf(world.db)), await scoredAfresh());
});
