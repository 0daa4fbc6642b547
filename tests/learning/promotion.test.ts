import { asc, count, eq, inArray } from "drizzle-orm";
import { afterAll, beforeAll, expect, test } from "vitest";
import { candidateLosses } from "@/db/schema/learning";
import { policyCuts } from "@/db/schema/policies";
import { labelLog, scorers } from "@/db/schema/scorers";
import { trail } from "@/db/schema/trail";
import { approveProposal } from "@/lib/approvals/approve";
import { rankingOf, stopRanking } from "@/lib/cases/ranking/ranking";
import type { PersonActor } from "@/lib/context";
import { scorerAsOf } from "@/lib/learning/as-of";
import { createCandidate } from "@/lib/learning/create-candidate";
import { dropCandidate } from "@/lib/learning/drop-candidate";
import { type HeldScorer, readScorerInUse } from "@/lib/learning/held-scorer";
import { CandidateInput } from "@/lib/learning/learning-schema";
import { proposePromotion } from "@/lib/learning/propose-promotion";
import { replayLog } from "@/lib/learning/replay";
import { followLog } from "@/lib/learning/shadow";
import { cutByScorer, newestScores } from "@/lib/policy/recent-scores";
import { testWorld, type WaitingCase, type World } from "../support/world";
import { LONG_LIFE_MS, mixedLife } from "./mixed-life";

let world: World;
let supervisor: PersonActor;
let riskManager: PersonActor;
let life: Awaited<ReturnType<typeof mixedLife>>;
let waiting: WaitingCase[];

beforeAll(async () => {
  world = await testWorld();
  life = await mixedLife(world, 21);
  supervisor = life.supervisor;
  riskManager = await world.person("risk_manager");
  // Enough arrivals for a review line of the policy's own.
  waiting = await world.waitingCases(220, { seed: 9_000 });
  await life.live(60);
}, LONG_LIFE_MS);
afterAll(() => stopRanking(world.db));

const add = (name: string, method: CandidateInput["method"], options: CandidateInput["options"] = {}) =>
  createCandidate(world.ctx(supervisor, life.later()), CandidateInput.parse({ name, method, options }));
const follow = () =>
  followLog(world.ctx({ kind: "system", job: "test" }, life.later()), new AbortController().signal);
const ask = (id: string) =>
  proposePromotion(world.ctx(supervisor, life.later()), { id, reason: "It lost less" });
const approve = (id: string, by = riskManager) => approveProposal(world.ctx(by, life.later()), { id });

async function rowOf(id: string) {
  const [row] = await world.db.select().from(scorers).where(eq(scorers.id, id));
  if (!row) throw new Error("The scorer is not there");
  return row;
}

const livedSum = async () => {
  const rows = await world.db.select({ loss: labelLog.loss }).from(labelLog).orderBy(asc(labelLog.seq));
  return rows.reduce((sum, { loss }) => sum + (loss ?? 0), 0);
};

test("a candidate that a second person approves is in use, with the next version and the lived loss", async () => {
  const candidate = await add("Freer", "implicit", { regularization: 0.1 });
  await follow();
  // Some labels that it has not seen yet: it catches up in the act.
  await life.live(15);
  const before = await readScorerInUse(world.db);
  expect((await rowOf(candidate.id)).logSeq).toBeLessThan(before.logSeq);
  await rankingOf(world.db).catchUp();
  const { approvalId } = await ask(candidate.id);
  expect((await readScorerInUse(world.db)).id).toBe(before.id);
  await approve(approvalId);

  const held = await readScorerInUse(world.db);
  expect(held).toMatchObject({
    id: candidate.id,
    name: "Freer",
    version: before.version + 1,
    logSeq: before.logSeq,
    cumulativeLoss: before.cumulativeLoss,
  });
  expect(held.scorer.method).toBe("implicit");
  expect(await rowOf(before.id)).toMatchObject({ role: "retired", version: before.version });

  await expectRankedBy(held);
});

/** Every waiting case stands where the scorer puts it. */
async function expectRankedBy(held: HeldScorer): Promise<void> {
  const view = await rankingOf(world.db).read(life.later(), (ranking) => ({
    version: ranking.version,
    logits: waiting.map(({ caseId }) => ranking.logitOf(caseId) as number),
  }));
  expect(view.version).toBe(held.version);
  for (const [index, { vector }] of waiting.entries()) {
    expect(view.logits[index]).toBeCloseTo(held.scorer.score(vector).logit, 9);
  }
}

test("the review line is taken anew by the scorer that came into use, however young the last one was", async () => {
  const cuts = await world.db.select().from(policyCuts).orderBy(asc(policyCuts.computedAt));
  const held = await readScorerInUse(world.db);
  const recent = await newestScores(world.db, 20_000);
  expect(cuts.at(-1)?.logit).toBeCloseTo(await cutByScorer(world.db, recent, 100, held), 9);
});

test("the trail tells of both, and of the two people", async () => {
  const entries = await world.db
    .select({ act: trail.act, actorId: trail.actorId, facts: trail.facts })
    .from(trail)
    .where(
      inArray(trail.act, ["approval.proposed", "approval.approved", "scorer.promoted", "scorer.demoted"]),
    )
    .orderBy(asc(trail.seq));
  expect(entries.map(({ act, actorId }) => [act, actorId])).toEqual([
    ["approval.proposed", supervisor.personId],
    ["scorer.demoted", riskManager.personId],
    ["scorer.promoted", riskManager.personId],
    ["approval.approved", riskManager.personId],
  ]);
  const held = await readScorerInUse(world.db);
  expect(JSON.parse(entries[2]?.facts ?? "")).toMatchObject({ version: held.version, logSeq: held.logSeq });
});

test(
  "the one it replaced runs on beside it, with all that it predicted before",
  async () => {
    const [demoted] = await world.db.select().from(scorers).where(eq(scorers.role, "candidate"));
    const [retired] = await world.db.select().from(scorers).where(eq(scorers.role, "retired"));
    expect(demoted).toMatchObject({ name: retired?.name, options: retired?.options });
    expect(demoted?.state.equals(retired?.state as Buffer)).toBe(true);
    await life.live(40);
    await follow();
    const [after] = await world.db.select().from(scorers).where(eq(scorers.role, "candidate"));
    const held = await readScorerInUse(world.db);
    expect(after?.logSeq).toBe(held.logSeq);
    expect(held.cumulativeLoss).toBeCloseTo(await livedSum(), 9);
    // Promoted back, it is bit for bit the scorer that had been in use all along.
    const { approvalId } = await ask(demoted?.id ?? "");
    await approve(approvalId);
    await life.live(20);
    const report = await replayLog(world.db);
    expect(report).toMatchObject({
      firstDifferingLoss: null,
      cumulativeLossEqual: true,
      differingStates: [],
    });
  },
  LONG_LIFE_MS,
);

test("a promoted scorer's own loss can be told from the one that was lived", async () => {
  const held = await rowOf((await readScorerInUse(world.db)).id);
  const [beside] = await world.db
    .select()
    .from(candidateLosses)
    .where(eq(candidateLosses.scorerId, held.id))
    .orderBy(asc(candidateLosses.seq))
    .limit(1);
  expect(beside).toBeDefined();
  const rows = await world.db
    .select({ seq: labelLog.seq, loss: labelLog.loss, beside: candidateLosses.loss })
    .from(labelLog)
    .leftJoin(candidateLosses, eq(candidateLosses.seq, labelLog.seq))
    .where(eq(candidateLosses.scorerId, held.id));
  const difference = rows.reduce((sum, row) => sum + (row.loss ?? 0) - (row.beside ?? 0), 0);
  expect(held.carriedLoss).toBeCloseTo(difference, 9);
});

test("the scorer of any version can be derived across promotions", async () => {
  const held = await readScorerInUse(world.db);
  const [retired] = await world.db
    .select()
    .from(scorers)
    .where(eq(scorers.role, "retired"))
    .orderBy(asc(scorers.version));
  const first = await scorerAsOf(world.db, retired?.version ?? 0);
  expect(Buffer.from(first.snapshot()).equals(retired?.state as Buffer)).toBe(true);
  expect((await scorerAsOf(world.db, (retired?.version ?? 0) + 1)).method).toBe("implicit");
  expect(Buffer.from((await scorerAsOf(world.db, held.version)).snapshot())).toEqual(
    Buffer.from(held.scorer.snapshot()),
  );
});

test(
  "of two who approve at once, one does it, and the queue follows a scorer of many parts too",
  async () => {
    const { id } = await add("Raced", "aggregate");
    await follow();
    const { approvalId } = await ask(id);
    await expect(ask(id)).rejects.toMatchObject({ code: "conflict" });
    const other = await world.person("supervisor");
    const all = await Promise.allSettled([
      approve(approvalId),
      approve(approvalId, other),
      approve(approvalId, supervisor),
    ]);
    expect(all.filter(({ status }) => status === "fulfilled")).toHaveLength(1);
    const [promotions] = await world.db.select({ count: count() }).from(trail).where(eq(trail.subjectId, id));
    // Added and promoted, once each.
    expect(promotions?.count).toBe(2);
    const held = await readScorerInUse(world.db);
    expect(held.id).toBe(id);
    await expectRankedBy(held);
    await expect(ask(id)).rejects.toMatchObject({ code: "conflict" });
  },
  LONG_LIFE_MS,
);

test("a candidate that was dropped meanwhile is not promoted, and its wish still waits", async () => {
  const { id } = await add("Gone", "gradient");
  await follow();
  const { approvalId } = await ask(id);
  await dropCandidate(world.ctx(supervisor, life.later()), { id });
  const before = await readScorerInUse(world.db);
  await expect(approve(approvalId)).rejects.toMatchObject({ code: "conflict" });
  expect((await readScorerInUse(world.db)).version).toBe(before.version);
});
