import { asc, eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { Chance } from "@/db/demo/random";
import { labelLog } from "@/db/schema/scorers";
import { inTransaction } from "@/db/tx";
import type { PersonActor } from "@/lib/context";
import { correctDecision } from "@/lib/decisions/correct";
import { decideCase } from "@/lib/decisions/decide";
import { undoDecision } from "@/lib/decisions/undo";
import { scorerAsOf } from "@/lib/learning/as-of";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { labelFromOutcomes } from "@/lib/learning/label-outcomes";
import { rebaseScorer } from "@/lib/learning/rebase";
import { replayLog } from "@/lib/learning/replay";
import { newId } from "@/lib/new-id";
import { createScorer } from "@/lib/scorer";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

let world: World;
let reviewer: PersonActor;
let supervisor: PersonActor;

beforeAll(async () => {
  world = await testWorld();
  reviewer = await world.person("reviewer");
  supervisor = await world.person("supervisor");
});

let clockMs = WORLD_START.getTime();
const later = () => {
  clockMs += 1_000;
  return new Date(clockMs);
};

const decide = (waiting: WaitingCase, fraudulent: boolean, seenVersion = 1) =>
  decideCase(world.ctx(reviewer, later()), {
    id: waiting.caseId,
    verdict: fraudulent ? "fraudulent" : "legitimate",
    typology: fraudulent ? "other" : null,
    confidence: "sure",
    seenVersion,
    scoreWasHidden: false,
    together: [],
  });

const stateNow = async () => Buffer.from((await readScorerInUse(world.db)).scorer.snapshot());

describe("a decision taken back", () => {
  test("leaves the weights bit for bit as if it had never been", async () => {
    const cases = await world.waitingCases(6, { seed: 1 });
    for (const [index, waiting] of cases.slice(0, 5).entries()) await decide(waiting, index % 2 === 0);
    const before = await stateNow();
    const last = cases[5] as WaitingCase;
    await decide(last, true);
    expect((await stateNow()).equals(before)).toBe(false);
    await undoDecision(world.ctx(reviewer, later()), { id: last.caseId });
    expect((await stateNow()).equals(before)).toBe(true);
    // The case is in the same hands again and can be decided anew.
    await decide(last, false, 3);
  });

  test("is refused after the grace period, for older decisions and for other people's", async () => {
    const [first, second] = (await world.waitingCases(2, { seed: 2 })) as [WaitingCase, WaitingCase];
    await decide(first, true);
    await decide(second, true);
    await expect(undoDecision(world.ctx(reviewer, later()), { id: first.caseId })).rejects.toMatchObject({
      code: "rule_broken",
    });
    await expect(undoDecision(world.ctx(supervisor, later()), { id: second.caseId })).rejects.toMatchObject({
      code: "rule_broken",
    });
    const tooLate = new Date(clockMs + 3 * 3_600_000);
    await expect(undoDecision(world.ctx(reviewer, tooLate), { id: second.caseId })).rejects.toMatchObject({
      code: "rule_broken",
    });
  });
});

describe("a correction", () => {
  test("leaves the weights bit for bit as if the right label had stood from the start", async () => {
    const cases = await world.waitingCases(8, { seed: 3 });
    for (const waiting of cases) await decide(waiting, true);
    await correctDecision(world.ctx(supervisor, later()), {
      id: (cases[2] as WaitingCase).caseId,
      verdict: "legitimate",
      typology: null,
      reason: "The customer confirmed it",
    });
    const held = await readScorerInUse(world.db);
    const log = await world.db.select().from(labelLog).orderBy(asc(labelLog.seq));
    const clean = createScorer(held.scorer.options);
    const labelAt = new Map(log.map((row) => [row.place ?? row.seq, row.label]));
    for (const row of log.filter((one) => one.place === null)) {
      const label = labelAt.get(row.seq);
      if (label)
        clean.learn(new Float64Array(new Uint8Array(row.vector).buffer), label as 1 | -1, row.weight);
    }
    expect(Buffer.from(clean.snapshot()).equals(await stateNow())).toBe(true);
  });

  test("of one's own decision is refused", async () => {
    const both = await world.person("reviewer", "supervisor");
    const [waiting] = (await world.waitingCases(1, { seed: 4 })) as [WaitingCase];
    await decideCase(world.ctx(both, later()), {
      id: waiting.caseId,
      verdict: "legitimate",
      typology: null,
      confidence: "unsure",
      seenVersion: 1,
      scoreWasHidden: false,
      together: [],
    });
    await expect(
      correctDecision(world.ctx(both, later()), {
        id: waiting.caseId,
        verdict: "fraudulent",
        typology: "other",
        reason: "Second thoughts",
      }),
    ).rejects.toMatchObject({ code: "rule_broken" });
    // Nor may they put it back once somebody else has corrected it.
    await correctDecision(world.ctx(supervisor, later()), {
      id: waiting.caseId,
      verdict: "fraudulent",
      typology: "other",
      reason: "The customer called",
    });
    await expect(
      correctDecision(world.ctx(both, later()), {
        id: waiting.caseId,
        verdict: "legitimate",
        typology: null,
        reason: "It was right",
      }),
    ).rejects.toMatchObject({ code: "rule_broken" });
  });
});

test("a few hundred mixed decisions, undos, corrections, outcomes and a new base rate replay bit for bit", async () => {
  const chance = new Chance(5);
  const cases = await world.waitingCases(420, { seed: 5 });
  const decided: WaitingCase[] = [];
  const versions: { version: number; state: Buffer }[] = [];
  for (const [index, waiting] of cases.entries()) {
    await decide(waiting, chance.hits(0.3));
    if (chance.hits(0.06)) {
      await undoDecision(world.ctx(reviewer, later()), { id: waiting.caseId });
      continue;
    }
    decided.push(waiting);
    if (chance.hits(0.05)) await correctSomething(chance.pick(decided));
    if (chance.hits(0.03)) await overturn(chance.pick(decided));
    if (index === 200)
      await inTransaction(world.db, (tx) => rebaseScorer(world.ctx(supervisor, later()), tx, 0.03));
    if (index % 60 === 0) {
      const held = await readScorerInUse(world.db);
      versions.push({ version: held.version, state: Buffer.from(held.scorer.snapshot()) });
    }
  }
  const report = await replayLog(world.db);
  expect(report).toMatchObject({ firstDifferingLoss: null, cumulativeLossEqual: true, differingStates: [] });
  expect(report.rows).toBeGreaterThan(400);
  for (const { version, state } of versions) {
    const derived = await scorerAsOf(world.db, version);
    expect(Buffer.from(derived.snapshot()).equals(state)).toBe(true);
  }
});

async function correctSomething(waiting: WaitingCase): Promise<void> {
  const [standing] = await world.db
    .select({ label: labelLog.label })
    .from(labelLog)
    .where(eq(labelLog.transactionId, waiting.transactionId))
    .orderBy(asc(labelLog.seq));
  const nowFraudulent = standing?.label !== 1;
  await correctDecision(world.ctx(supervisor, later()), {
    id: waiting.caseId,
    verdict: nowFraudulent ? "fraudulent" : "legitimate",
    typology: nowFraudulent ? "other" : null,
    reason: "Found otherwise",
  }).catch((error: { code?: string }) => {
    // Corrected before, by the same supervisor: nobody corrects their own finding.
    expect(error.code).toBe("rule_broken");
  });
}

async function overturn(waiting: WaitingCase): Promise<void> {
  const outcome = { transactionId: waiting.transactionId, outcomeId: newId(), label: 1 as const };
  await inTransaction(world.db, (tx) => labelFromOutcomes(tx, later(), [outcome]));
}
