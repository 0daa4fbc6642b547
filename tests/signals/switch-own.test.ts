import { asc, desc, eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { decisions } from "@/db/schema/cases";
import { labelLog, scorers } from "@/db/schema/scorers";
import { trail } from "@/db/schema/trail";
import { scores, signalSets } from "@/db/schema/transactions";
import { readDecisionRecord } from "@/lib/audit/decision-record";
import { caseView } from "@/lib/cases/read";
import { correctDecision } from "@/lib/decisions/correct";
import { undoDecision } from "@/lib/decisions/undo";
import { scorerAsOf } from "@/lib/learning/as-of";
import { createCandidate } from "@/lib/learning/create-candidate";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { replayLog } from "@/lib/learning/replay";
import { followLog } from "@/lib/learning/shadow";
import { DIMENSION } from "@/lib/signals/catalogue";
import { testWorld, type WaitingCase } from "../support/world";
import { Office } from "./own-signal";

const bits = (weights: Float64Array) =>
  Buffer.from(new Uint8Array(weights.buffer, weights.byteOffset, weights.byteLength)).toString("hex");
const inUse = async ({ world }: Office) => (await readScorerInUse(world.db)).scorer;
const stateOf = async (office: Office) => Buffer.from((await inUse(office)).snapshot());
const weightsOf = async (office: Office) => (await inUse(office)).weights();
const wholeLife = {
  rows: expect.any(Number),
  labels: expect.any(Number),
  firstDifferingLoss: null,
  cumulativeLossEqual: true,
  differingStates: [],
};

describe("an own signal counts as if it had always been there", () => {
  let late: Office;
  let early: Office;
  let never: Office;
  let waiting: { late: WaitingCase[]; early: WaitingCase[]; never: WaitingCase[] };
  let signalId: string;
  const states = new Map<number, Buffer>();
  const remember = async () => {
    const { version, scorer } = await readScorerInUse(late.world.db);
    states.set(version, Buffer.from(scorer.snapshot()));
  };

  beforeAll(async () => {
    late = await Office.open(await testWorld());
    early = await Office.open(await testWorld());
    never = await Office.open(await testWorld());
    waiting = {
      late: await late.cases(120, 5),
      early: await early.cases(120, 5),
      never: await never.cases(120, 5),
    };
    await early.switch((await early.draft()).signalId, "on");
    for (const [office, of] of [
      [late, waiting.late],
      [early, waiting.early],
      [never, waiting.never],
    ] as const) {
      await office.label(of.slice(0, 92));
      await office.decideAll(of.slice(92, 100));
    }
    await remember();
    ({ signalId } = await late.draft());
  }, 240_000);

  test("switched on after a hundred labels, the state equals to the bit one that had it from the start", async () => {
    expect(bits(await weightsOf(late))).not.toBe(bits((await weightsOf(early)).subarray(0, DIMENSION)));
    await late.switch(signalId, "on");
    await remember();
    const { signals } = await readScorerInUse(late.world.db);
    expect(signals).toMatchObject({ version: 2, dimension: DIMENSION + 1 });
    expect(Math.abs((await weightsOf(late))[DIMENSION] ?? 0)).toBeGreaterThan(0.01);
    expect((await stateOf(late)).equals(await stateOf(early))).toBe(true);
  });

  test("and goes on alike, though its waiting cases were scored without the signal", async () => {
    await late.decideAll(waiting.late.slice(100, 110));
    await early.decideAll(waiting.early.slice(100, 110));
    await never.decideAll(waiting.never.slice(100, 110));
    await remember();
    expect((await stateOf(late)).equals(await stateOf(early))).toBe(true);
    const [last] = await late.world.db.select().from(labelLog).orderBy(desc(labelLog.seq)).limit(1);
    expect(last?.vector.length).toBe(8 * (DIMENSION + 1));
    expect(last?.signalSetVersion).toBe(2);
  });

  test("an undo and a correction re-run with it", async () => {
    const [undone, corrected] = [110, 96];
    for (const [office, of] of [
      [late, waiting.late],
      [early, waiting.early],
      [never, waiting.never],
    ] as const) {
      await office.decide(of[undone] as WaitingCase, true);
      await undoDecision(office.as(office.reviewer), { id: (of[undone] as WaitingCase).caseId });
      await correctDecision(office.as(office.supervisor), {
        id: (of[corrected] as WaitingCase).caseId,
        verdict: "fraudulent",
        typology: "other",
        reason: "The customer called",
      });
    }
    await remember();
    expect((await stateOf(late)).equals(await stateOf(early))).toBe(true);
  });

  test("switched off again, the weights of the catalogue equal to the bit those of one that never had it", async () => {
    await late.switch(signalId, "off");
    await remember();
    const weights = await weightsOf(late);
    expect(weights.length).toBe(DIMENSION + 1);
    expect(weights[DIMENSION]).toBe(0);
    expect(bits(weights.subarray(0, DIMENSION))).toBe(bits(await weightsOf(never)));
    await late.decideAll(waiting.late.slice(112, 116));
    await never.decideAll(waiting.never.slice(112, 116));
    await remember();
    expect(bits((await weightsOf(late)).subarray(0, DIMENSION))).toBe(bits(await weightsOf(never)));
  });

  test("on once more it has its old place", async () => {
    await late.switch(signalId, "on");
    await remember();
    const { signals } = await readScorerInUse(late.world.db);
    expect(signals.version).toBe(4);
    expect(signals.own).toMatchObject([{ id: signalId, position: 0, isOn: true }]);
    await early.decideAll(waiting.early.slice(112, 116));
    expect((await stateOf(late)).equals(await stateOf(early))).toBe(true);
  });

  test("the log lives again to the bit across every switch", async () => {
    expect(await replayLog(late.world.db)).toEqual(wholeLife);
    expect(await replayLog(early.world.db)).toEqual(wholeLife);
  });

  test("the scorer of any version is derived as it was", async () => {
    expect(states.size).toBeGreaterThanOrEqual(6);
    for (const [version, state] of states) {
      expect(
        Buffer.from((await scorerAsOf(late.world.db, version)).snapshot()).equals(state),
        `version ${version}`,
      ).toBe(true);
    }
  });

  test("what was shown with each verdict is derived again, and names the signal where it was on", async () => {
    const rows = await late.world.db.select().from(decisions).orderBy(asc(decisions.scorerVersionBefore));
    const auditor = await late.world.person("auditor");
    const lines = new Set<boolean>();
    for (const row of [rows[3], rows[7], rows[9], rows[15], rows.at(-1)]) {
      const record = await readDecisionRecord(late.as(auditor), { id: row?.id as string });
      expect(record.rederivedEqual).toBe(true);
      const { signals, baseRateDecibans, littleExperienceDecibans, totalDecibans } = record.evidence;
      const sum = signals.reduce((total, { decibans }) => total + decibans, 0);
      expect(sum + baseRateDecibans + littleExperienceDecibans).toBeCloseTo(totalDecibans, 9);
      lines.add(signals.some(({ name }) => name === "Loyal customer"));
    }
    expect([...lines].sort()).toEqual([false, true]);
  });

  test("a case shows the signal with its reading, and as not available where the attribute is missing", async () => {
    const line = async (index: number) => {
      const { evidence } = await caseView(late.as(late.supervisor), {
        id: (waiting.late[index] as WaitingCase).caseId,
      });
      return evidence?.signals.find(({ name }) => name === "Loyal customer");
    };
    expect(await line(117)).toMatchObject({ available: true, reading: expect.stringMatching(/^about /) });
    // 118 is the seventh of seven.
    expect(await line(118)).toMatchObject({ available: false, reading: "not available", decibans: 0 });
  });

  test("every switch is in the trail, with the formula and the set", async () => {
    const entries = await late.world.db
      .select()
      .from(trail)
      .where(eq(trail.subjectId, signalId))
      .orderBy(asc(trail.seq));
    expect(entries.map(({ act }) => act)).toEqual([
      "signal.drafted",
      "signal.switched_on",
      "signal.switched_off",
      "signal.switched_on",
    ]);
    expect(JSON.parse(entries[1]?.facts ?? "{}")).toMatchObject({
      signalSetVersion: 2,
      position: 0,
      labels: 100,
    });
    expect(await late.world.db.select({ version: signalSets.version }).from(signalSets)).toHaveLength(4);
  });
});

test("candidates begin anew with the signal and come to what the scorer in use has", async () => {
  const office = await Office.open(await testWorld());
  const waiting = await office.cases(40, 9);
  await office.decideAll(waiting.slice(0, 20));
  await createCandidate(office.as(office.supervisor), {
    name: "The same again",
    method: "improper",
    options: {},
  });
  await followLog(office.as(office.supervisor), new AbortController().signal);
  await office.switch((await office.draft()).signalId, "on");
  await office.decideAll(waiting.slice(20, 30));
  await followLog(office.as(office.supervisor), new AbortController().signal);
  const [candidate] = await office.world.db.select().from(scorers).where(eq(scorers.role, "candidate"));
  expect(candidate?.signalSetVersion).toBe(2);
  expect(candidate?.state.equals(await stateOf(office))).toBe(true);
});

test("decisions go on while a signal is switched, and none is lost", async () => {
  const office = await Office.open(await testWorld());
  const waiting = await office.cases(60, 11);
  await office.decideAll(waiting.slice(0, 30));
  const { signalId } = await office.draft();
  const switched = office.switch(signalId, "on");
  const decided = Promise.all(waiting.slice(30).map((one, index) => office.decide(one, index % 2 === 0)));
  await Promise.all([switched, decided]);
  const held = await readScorerInUse(office.world.db);
  expect(held.scorer.labels).toBe(60);
  expect(held.signals.version).toBe(2);
  expect(await replayLog(office.world.db)).toEqual(wholeLife);
});

test("a formula that fails on a payment stops nothing", async () => {
  const office = await Office.open(await testWorld());
  const waiting = await office.cases(12, 13);
  await office.decideAll(waiting.slice(0, 5));
  const { signalId } = await office.draft({ formula: "1 / (amount - amount) + attributes.unheard_of" });
  await office.switch(signalId, "on");
  await office.decideAll(waiting.slice(5, 10));
  expect((await weightsOf(office))[DIMENSION]).toBe(0);
  expect(await office.world.db.select().from(scores)).toHaveLength(12);
});
