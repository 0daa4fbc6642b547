import { asc, eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { hindsightFits } from "@/db/schema/learning";
import { scorers } from "@/db/schema/scorers";
import type { PersonActor } from "@/lib/context";
import { undoDecision } from "@/lib/decisions/undo";
import { readLearning } from "@/lib/learning/compare";
import { createCandidate } from "@/lib/learning/create-candidate";
import { fitHindsight } from "@/lib/learning/fit-hindsight";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { CandidateInput, LearningView } from "@/lib/learning/learning-schema";
import { readJudged } from "@/lib/learning/own-predictions";
import { followLog } from "@/lib/learning/shadow";
import { showScorer } from "@/lib/learning/show-scorer";
import { bestInHindsight, createScorer, type Label } from "@/lib/scorer";
import { testWorld, type WaitingCase, type World } from "../support/world";
import { labelsHeld } from "./labels-held";
import { LONG_LIFE_MS, mixedLife } from "./mixed-life";

let world: World;
let supervisor: PersonActor;
let auditor: PersonActor;
let life: Awaited<ReturnType<typeof mixedLife>>;

beforeAll(async () => {
  world = await testWorld();
  life = await mixedLife(world, 31);
  supervisor = life.supervisor;
  auditor = await world.person("auditor");
});

const system = () => world.ctx({ kind: "system", job: "test" }, life.later());
const { signal } = new AbortController();
const look = (span: { from?: string; to?: string } = {}) =>
  readLearning(world.ctx(auditor, life.later()), span);
const add = (name: string, method: CandidateInput["method"]) =>
  createCandidate(world.ctx(supervisor, life.later()), CandidateInput.parse({ name, method }));
const fits = () => world.db.select().from(hindsightFits).orderBy(asc(hindsightFits.asOfSeq));

test("before the first label nothing is defined, and nothing is 0 instead", async () => {
  const view = await look();
  expect(LearningView.parse(view)).toEqual(view);
  expect(view).toMatchObject({ curve: [], hindsight: null, window: { labels: 0 } });
  expect(view.scorers).toMatchObject([
    {
      role: "in_use",
      predicted: 0,
      meanLoss: null,
      regret: null,
      brier: null,
      auc: null,
      averagePrecision: null,
      precisionAtCapacity: null,
      spiegelhalterZ: null,
      calibration: [],
    },
  ]);
});

describe("once there are labels", () => {
  beforeAll(async () => {
    await life.begin(70);
    await life.live(60);
    await add("The same again", "improper");
    await add("Six together", "aggregate");
    await life.live(25);
    await followLog(system(), signal);
    await fitHindsight(system(), signal);
  }, LONG_LIFE_MS);

  test("a candidate with the options of the scorer in use has the same figures", async () => {
    const view = await look();
    expect(LearningView.parse(view)).toEqual(view);
    expect(view.scorers.map(({ name, role }) => [name, role])).toEqual([
      ["First scorer", "in_use"],
      ["The same again", "candidate"],
      ["Six together", "candidate"],
    ]);
    const [inUse, twin, six] = view.scorers;
    for (const key of ["labels", "predicted", "cumulativeLoss", "meanLoss", "certificate"] as const)
      expect(twin?.[key]).toBe(inUse?.[key]);
    for (const key of ["brier", "auc", "averagePrecision", "precisionAtCapacity"] as const) {
      // The probability in use is had back from its loss, to rounding.
      expect(twin?.[key]?.value).toBeCloseTo(inUse?.[key]?.value ?? Number.NaN, 12);
      expect(twin?.[key]?.n).toBe(inUse?.[key]?.n);
    }
    expect(twin?.regret).toEqual(inUse?.regret);
    expect(inUse?.livedPredicted).toBe(inUse?.predicted);
    expect(twin?.livedPredicted).toBeLessThan(twin?.predicted ?? 0);
    expect(six?.cumulativeLoss).not.toBe(inUse?.cumulativeLoss);
  });

  test("losses are those that were lived, and labels those that hold", async () => {
    const view = await look();
    const held = await readScorerInUse(world.db);
    const { rows } = await readJudged(world.db, {}, 1_000);
    const holding = rows.filter(({ holds }) => holds !== 0);
    expect(rows.some(({ came, holds }) => holds !== 0 && came !== holds)).toBe(true);
    expect(rows.some(({ holds }) => holds === 0)).toBe(true);
    expect(view.window).toMatchObject({
      labels: held.scorer.labels,
      fraudulent: holding.filter(({ holds }) => holds === 1).length,
      fromSeq: 1,
      leftOut: 0,
    });
    const [inUse] = view.scorers;
    expect(inUse?.cumulativeLoss).toBeCloseTo(held.cumulativeLoss, 9);
    const squares = holding.map(({ came, holds, livedLoss }) => {
      const p = came === 1 ? Math.exp(-livedLoss) : 1 - Math.exp(-livedLoss);
      return (p - (holds === 1 ? 1 : 0)) ** 2;
    });
    const mean = squares.reduce((sum, one) => sum + one, 0) / squares.length;
    expect(inUse?.brier?.value).toBeCloseTo(mean, 12);
    const counted = inUse?.calibration.reduce((sum, { n }) => sum + n, 0);
    expect(counted).toBe(holding.length);
  });

  test("regret is what was lived beyond the best fixed weights for the labels in force", async () => {
    const { labels, vectors, options } = await labelsHeld(world.db);
    const bounding = createScorer(options);
    const best = bestInHindsight(
      vectors.map((vector) => bounding.place(vector).vector),
      labels as Label[],
      options.weightBound ?? 0,
      options.offset,
    );
    const held = await readScorerInUse(world.db);
    const [inUse] = (await look()).scorers;
    expect(inUse?.regret).toMatchObject({ labels: labels.length, asOfSeq: held.logSeq });
    expect(inUse?.regret?.hindsightLoss).toBeCloseTo(best.loss, 8);
    expect(inUse?.regret?.value).toBeCloseTo(held.cumulativeLoss - best.loss, 8);
    const shown = await showScorer(world.ctx(auditor, life.later()));
    expect(shown.regret).toBeCloseTo(inUse?.regret?.value ?? 0, 9);
    expect(shown).toMatchObject({
      hindsightLabels: labels.length,
      hindsightLoss: inUse?.regret?.hindsightLoss,
    });
  });

  test("the curve rises to each scorer's loss and knows hindsight where it was computed", async () => {
    const view = await look();
    expect(view.curve.length).toBeLessThanOrEqual(120);
    const last = view.curve.at(-1);
    for (const { id, cumulativeLoss } of view.scorers) expect(last?.losses[id]).toBe(cumulativeLoss);
    const inUse = view.scorers[0]?.id ?? "";
    const rising = view.curve.map(({ losses }) => losses[inUse] as number);
    expect(rising).toEqual([...rising].sort((a, b) => a - b));
    const known = view.curve.flatMap(({ hindsight }) => hindsight ?? []);
    expect(known).toEqual((await fits()).map(({ loss }) => loss));
    expect(known).toHaveLength(3);
    expect(view.hindsight).toMatchObject({ loss: known.at(-1), labels: view.window.labels });
  });

  test("a window judges its own labels only, and shows no hindsight where it begins later", async () => {
    const whole = await look();
    const middle = whole.curve[60]?.at ?? "";
    const view = await look({ from: middle });
    expect(view.window.fromSeq).toBeGreaterThan(1);
    expect(view.window.labels).toBeLessThan(whole.window.labels);
    expect(view.curve.every(({ hindsight }) => hindsight === null)).toBe(true);
    const before = await look({ to: new Date(Date.parse(middle) - 1).toISOString() });
    const [a, b, all] = [before, view, whole].map(({ scorers: [inUse] }) => inUse?.cumulativeLoss ?? 0);
    expect((a ?? 0) + (b ?? 0)).toBeCloseTo(all ?? 0, 9);
  });

  test("hindsight waits for enough new labels, and not when an earlier one was replaced", async () => {
    const before = await fits();
    await fitHindsight(system(), signal);
    const [one, two] = (await world.waitingCases(2, { seed: 77_000 })) as [WaitingCase, WaitingCase];
    await life.decide(one, true);
    await fitHindsight(system(), signal);
    expect(await fits()).toEqual(before);
    await life.decide(two, true);
    await undoDecision(world.ctx(life.reviewer, life.later()), { id: two.caseId });
    await fitHindsight(system(), signal);
    const after = await fits();
    const held = await readScorerInUse(world.db);
    expect(after.at(-1)).toMatchObject({ asOfSeq: held.logSeq, labels: held.scorer.labels });
    // What was replaced lies behind the shorter logs, which stand as they were.
    expect(after.slice(0, 2)).toEqual(before.slice(0, 2));
    expect(after).toHaveLength(3);
  });

  test("a candidate that has not come as far has no regret yet, and its curve ends where it is", async () => {
    const late = await add("Late", "gradient");
    const view = await look();
    const figures = view.scorers.find(({ id }) => id === late.id);
    const head = (await readScorerInUse(world.db)).logSeq;
    expect(figures).toMatchObject({ predicted: 0, behind: head, regret: null });
    expect(view.curve.some(({ losses }) => late.id in losses)).toBe(false);
    const [row] = await world.db.select().from(scorers).where(eq(scorers.id, late.id));
    expect(row?.startedSeq).toBe(head);
  });
});
