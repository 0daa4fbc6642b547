import { asc, eq } from "drizzle-orm";
import { beforeAll, expect, test } from "vitest";
import { cases } from "@/db/schema/cases";
import { labelLog } from "@/db/schema/scorers";
import { transactions } from "@/db/schema/transactions";
import type { PersonActor } from "@/lib/context";
import { correctDecision } from "@/lib/decisions/correct";
import { decideCase } from "@/lib/decisions/decide";
import { undoDecision } from "@/lib/decisions/undo";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { labelsInForce } from "@/lib/learning/place";
import { replayLog } from "@/lib/learning/replay";
import { createScorer } from "@/lib/scorer";
import { AMOUNT, LATER, labelOf, moneyOf, sendOutcome, waitingCase } from "../outcomes/payments";
import { testWorld, type WaitingCase, type World } from "../support/world";

let world: World;
let reviewer: PersonActor;
let supervisor: PersonActor;
let minute = 0;

beforeAll(async () => {
  world = await testWorld();
  reviewer = await world.person("reviewer");
  supervisor = await world.person("supervisor");
});

const now = () => new Date(LATER.getTime() + ++minute * 60_000);
const stateNow = async () => Buffer.from((await readScorerInUse(world.db)).scorer.snapshot());
const revisionOf = async (caseId: string) => {
  const [row] = await world.db.select().from(cases).where(eq(cases.id, caseId));
  return row?.revision as number;
};
const inForce = async (payment: WaitingCase) =>
  (await labelsInForce(world.db, [payment.transactionId])).get(payment.transactionId) ?? null;

/** A payment of an account whose other payment waits: it passed, was cleared later, and has no case yet. */
async function clearedBesideWaiting(): Promise<{ main: WaitingCase; cleared: WaitingCase }> {
  const accountId = `ACC-${++minute}`;
  const main = await waitingCase(world);
  const cleared = await waitingCase(world);
  for (const { transactionId } of [main, cleared]) {
    await world.db.update(transactions).set({ accountId }).where(eq(transactions.id, transactionId));
  }
  await world.db.update(cases).set({ state: "lapsed" }).where(eq(cases.id, cleared.caseId));
  await sendOutcome(world, cleared, { kind: "cleared", reasonFamily: undefined, stage: undefined });
  await world.db.update(cases).set({ state: "open" }).where(eq(cases.id, cleared.caseId));
  // Somebody decides others meanwhile: the cleared label stands in the middle of the log.
  for (const _ of [1, 2, 3]) await decide(await waitingCase(world), "fraudulent");
  return { main, cleared };
}

async function decide(
  on: WaitingCase,
  verdict: "fraudulent" | "legitimate" | "customer_misuse",
  together: WaitingCase[] = [],
) {
  const typology = verdict === "fraudulent" ? ("other" as const) : null;
  return decideCase(world.ctx(reviewer, now()), {
    id: on.caseId,
    verdict,
    typology,
    confidence: "sure",
    seenVersion: await revisionOf(on.caseId),
    scoreWasHidden: false,
    together: together.map(({ caseId }) => ({ caseId, verdict, typology })),
  });
}

/** The scorer that learns, place by place, what now holds there, and nothing else. */
async function learnedAnew(): Promise<Buffer> {
  const { scorer } = await readScorerInUse(world.db);
  const log = await world.db.select().from(labelLog).orderBy(asc(labelLog.seq));
  const labelAt = new Map(log.map((row) => [row.place ?? row.seq, row.label]));
  const clean = createScorer(scorer.options);
  for (const row of log.filter(({ place }) => place === null)) {
    const label = labelAt.get(row.seq);
    if (label) clean.learn(new Float64Array(new Uint8Array(row.vector).buffer), label as 1 | -1, row.weight);
  }
  return Buffer.from(clean.snapshot());
}

async function expectReplays(): Promise<void> {
  expect((await learnedAnew()).equals(await stateNow())).toBe(true);
  expect(await replayLog(world.db)).toMatchObject({
    firstDifferingLoss: null,
    cumulativeLossEqual: true,
    differingStates: [],
  });
}

test("a finding of fraud takes the place of what an outcome had cleared, and the weights follow exactly", async () => {
  const { main, cleared } = await clearedBesideWaiting();
  const before = await inForce(cleared);
  expect(before).toMatchObject({ label: -1, kind: "outcome" });
  const cleanState = await stateNow();
  const answer = await decide(main, "fraudulent", [cleared]);
  expect(await inForce(cleared)).toMatchObject({ label: 1, kind: "decision", place: before?.place });
  expect(await labelOf(world, cleared)).toBe(1);
  expect(await moneyOf(world, cleared)).toMatchObject({ attempted: AMOUNT, falsePositive: 0 });
  expect(answer.moved).not.toBeNull();
  expect(answer.scorerVersion).toBe((await readScorerInUse(world.db)).version);
  await expectReplays();

  await undoDecision(world.ctx(reviewer, now()), { id: main.caseId });
  expect(await inForce(cleared)).toEqual(before);
  expect((await stateNow()).equals(cleanState)).toBe(true);
  expect(await labelOf(world, cleared)).toBe(-1);
  expect(await moneyOf(world, cleared)).toMatchObject({ attempted: 0, missed: 0 });
  await expectReplays();
});

test("the same verdict as the outcome's leaves the log alone; a customer's own misuse takes the label away", async () => {
  const agreed = await clearedBesideWaiting();
  const before = await inForce(agreed.cleared);
  await decide(agreed.main, "legitimate", [agreed.cleared]);
  expect(await inForce(agreed.cleared)).toEqual(before);

  const misused = await clearedBesideWaiting();
  const stood = await inForce(misused.cleared);
  const cleanState = await stateNow();
  await decide(misused.main, "customer_misuse", [misused.cleared]);
  expect(await inForce(misused.cleared)).toBeNull();
  expect(await labelOf(world, misused.cleared)).toBeNull();
  await expectReplays();
  await undoDecision(world.ctx(reviewer, now()), { id: misused.main.caseId });
  expect(await inForce(misused.cleared)).toEqual(stood);
  expect((await stateNow()).equals(cleanState)).toBe(true);
  await expectReplays();
});

test("a report of fraud is stronger than a verdict, and a correction stronger than both", async () => {
  const reported = await waitingCase(world);
  await sendOutcome(world, reported);
  const before = await inForce(reported);
  await decide(reported, "legitimate");
  expect(await inForce(reported)).toEqual(before);

  const { main, cleared } = await clearedBesideWaiting();
  await decide(main, "fraudulent", [cleared]);
  await correctDecision(world.ctx(supervisor, now()), {
    id: cleared.caseId,
    verdict: "legitimate",
    typology: null,
    reason: "The customer confirmed it",
  });
  expect(await inForce(cleared)).toMatchObject({ label: -1, kind: "correction" });
  expect(await moneyOf(world, cleared)).toMatchObject({ attempted: 0 });
  await expectReplays();
});
