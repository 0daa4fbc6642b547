import { desc, eq } from "drizzle-orm";
import { beforeAll, expect, test } from "vitest";
import { decisions } from "@/db/schema/cases";
import { trail } from "@/db/schema/trail";
import { readDecisionRecord } from "@/lib/audit/decision-record";
import { DecisionRecordView } from "@/lib/audit/schema";
import type { PersonActor } from "@/lib/context";
import { correctDecision } from "@/lib/decisions/correct";
import { decideCase } from "@/lib/decisions/decide";
import { newId } from "@/lib/new-id";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

let world: World;
let reviewer: PersonActor;
let auditor: PersonActor;
let waiting: WaitingCase[];
let decisionIds: string[];
const later = new Date(WORLD_START.getTime() + 3_600_000);

const decide = (of: WaitingCase, verdict: "fraudulent" | "legitimate") =>
  decideCase(world.ctx(reviewer), {
    id: of.caseId,
    verdict,
    typology: verdict === "fraudulent" ? "details_theft" : null,
    confidence: "sure",
    seenVersion: 1,
    scoreWasHidden: false,
    together: [],
  });

beforeAll(async () => {
  world = await testWorld();
  reviewer = await world.person("reviewer");
  auditor = await world.person("auditor");
  waiting = await world.waitingCases(6, { seed: 5 });
  decisionIds = [];
  for (const [index, one] of waiting.entries()) {
    decisionIds.push((await decide(one, index % 2 === 0 ? "fraudulent" : "legitimate")).decisionId);
  }
});

test("shows the decision, its evidence, policy and trail, and that the score comes out again", async () => {
  const [id] = decisionIds.slice(4) as [string];
  const record = await readDecisionRecord(world.ctx(auditor, later), { id });
  expect(DecisionRecordView.parse(record)).toEqual(record);
  expect(record.decision).toMatchObject({
    decisionId: id,
    verdict: "fraudulent",
    typology: "details_theft",
    by: { id: reviewer.personId },
    stands: true,
  });
  expect(record.rederivedEqual).toBe(true);
  expect(record.policy).toMatchObject({ version: record.evidence.policyVersion, state: "approved" });
  expect(record.scorerVersionAfter).toBe(record.evidence.scorerVersion + 1);
  expect(record.entries.map((entry) => entry.act)).toEqual(["case.decided"]);
  const { evidence } = record;
  const lines = evidence.signals.reduce((sum, signal) => sum + signal.decibans, 0);
  expect(evidence.baseRateDecibans + lines + evidence.littleExperienceDecibans).toBeCloseTo(
    evidence.totalDecibans,
    9,
  );
});

test("stays as it was after the verdict was corrected and the log run anew", async () => {
  const supervisor = await world.person("supervisor");
  const [corrected] = waiting as [WaitingCase];
  const before = await readDecisionRecord(world.ctx(auditor, later), { id: decisionIds[3] as string });
  await correctDecision(world.ctx(supervisor, later), {
    id: corrected.caseId,
    verdict: "legitimate",
    typology: null,
    reason: "The customer called: it was theirs",
  });
  const after = await readDecisionRecord(world.ctx(auditor, later), { id: decisionIds[3] as string });
  expect(after.evidence).toEqual(before.evidence);
  expect(after.rederivedEqual).toBe(true);

  const first = await readDecisionRecord(world.ctx(auditor, later), { id: decisionIds[0] as string });
  expect(first.decision.stands).toBe(false);
  expect(first.rederivedEqual).toBe(true);
  expect(first.entries.map((entry) => entry.act)).toEqual(["case.decided", "decision.corrected"]);
});

test("says so when the numbers kept with the decision are not what the scorer gives", async () => {
  const [id] = decisionIds.slice(5) as [string];
  const [row] = await world.db.select().from(decisions).where(eq(decisions.id, id));
  const forged = Buffer.from(row?.evidence ?? Buffer.alloc(0));
  forged.writeUInt8((forged.readUInt8(0) ^ 1) & 0xff, 0);
  await world.db.update(decisions).set({ evidence: forged }).where(eq(decisions.id, id));
  const record = await readDecisionRecord(world.ctx(auditor, later), { id });
  expect(record.rederivedEqual).toBe(false);
});

test("reviewers see the record of their own cases, others' they do not", async () => {
  const id = decisionIds[1] as string;
  const other = await world.person("reviewer");
  await expect(readDecisionRecord(world.ctx(reviewer, later), { id })).resolves.toMatchObject({
    decision: { decisionId: id },
  });
  await expect(readDecisionRecord(world.ctx(other, later), { id })).rejects.toMatchObject({
    code: "forbidden",
  });
  const administrator = await world.person("administrator");
  await expect(readDecisionRecord(world.ctx(administrator, later), { id })).rejects.toMatchObject({
    code: "forbidden",
  });
});

test("reading by those who read everybody's is an entry; a reviewer's own reading is none", async () => {
  const id = decisionIds[2] as string;
  const readings = () =>
    world.db.select().from(trail).where(eq(trail.subjectId, id)).orderBy(desc(trail.seq));
  await readDecisionRecord(world.ctx(reviewer, later), { id });
  const before = (await readings()).length;
  await readDecisionRecord(world.ctx(auditor, later), { id });
  const after = await readings();
  expect(after).toHaveLength(before + 1);
  expect(after[0]).toMatchObject({ act: "trail.read", subjectKind: "decision", actorId: auditor.personId });
});

test("a decision that is not there is not found", async () => {
  await expect(readDecisionRecord(world.ctx(auditor, later), { id: newId() })).rejects.toMatchObject({
    code: "not_found",
  });
});
