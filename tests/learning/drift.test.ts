import { desc, eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { Chance } from "@/db/demo/random";
import { driftWarnings } from "@/db/schema/learning";
import { trail } from "@/db/schema/trail";
import { inTransaction } from "@/db/tx";
import type { PersonActor } from "@/lib/context";
import { lockScorerInUse, saveScorer } from "@/lib/learning/held-scorer";
import { learnLabel } from "@/lib/learning/learn";
import { raiseDriftWarnings } from "@/lib/learning/raise-drift-warnings";
import { rebaseScorer } from "@/lib/learning/rebase";
import { seeDriftWarning } from "@/lib/learning/see-drift-warning";
import { showDrift } from "@/lib/learning/show-drift";
import { CATALOGUE, DIMENSION, OFFSETS } from "@/lib/signals/catalogue";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

/** A signal that tells fraud, and later the opposite, and one that says nothing and moves when that happens. */
const [TELLING, MOVING] = [0, 5];

let world: World;
let supervisor: PersonActor;
let waiting: WaitingCase;
let clockMs = WORLD_START.getTime();
const chance = new Chance(42);
const now = () => new Date(clockMs);
const system = () => world.ctx({ kind: "system", job: "learning.drift" }, now());

beforeAll(async () => {
  world = await testWorld();
  supervisor = await world.person("supervisor");
  [waiting] = (await world.waitingCases(1)) as [WaitingCase];
});

/** Log odds of fraud by what the telling signal reads. */
const WORLDS = {
  first: (told: number) => -1 + 3 * told,
  turned: (told: number) => -1 - 3 * told,
  flood: () => 4,
};

/** Labels as decisions teach them, each predicted before it is learned. */
async function live(
  count: number,
  lived: keyof typeof WORLDS,
  kind: "decision" | "outcome" = "decision",
): Promise<void> {
  await inTransaction(world.db, async (tx) => {
    const held = await lockScorerInUse(tx);
    for (let i = 0; i < count; i++) {
      clockMs += 1_000;
      const vector = new Float64Array(DIMENSION);
      const told = 2 * chance.unit() - 1;
      vector[OFFSETS[TELLING] as number] = told;
      vector[OFFSETS[MOVING] as number] = lived === "turned" && chance.hits(0.5) ? 1 : 0;
      vector[DIMENSION - 1] = 1;
      const label = kind === "outcome" || chance.unit() < 1 / (1 + Math.exp(-WORLDS[lived](told))) ? 1 : -1;
      const source = {
        kind,
        transactionId: waiting.transactionId,
        caseId: null,
        decisionId: null,
        outcomeId: null,
        personId: null,
      };
      await learnLabel(tx, held, now(), source, vector, label);
    }
    await saveScorer(tx, held, now());
  });
}

const warnings = () => world.db.select().from(driftWarnings).orderBy(desc(driftWarnings.seq));

describe("on the label log of an installation", () => {
  test("nothing is watched while the scorer warms up", async () => {
    await live(150, "first");
    await raiseDriftWarnings(system());
    const view = await showDrift(world.ctx(supervisor, now()));
    expect(view).toMatchObject({ watched: 0, warmUp: 200, warnings: [] });
    expect(view.loss.value).toBeNull();
    expect(view.calibration.value).toBeNull();
  });

  test("without drift there is no warning, and both statistics are in their bands", async () => {
    await live(750, "first");
    await raiseDriftWarnings(system());
    const { watched, loss, calibration, warnings: raised } = await showDrift(world.ctx(supervisor, now()));
    expect(watched).toBe(700);
    expect(raised).toEqual([]);
    expect(Math.abs(loss.value as number)).toBeLessThan(loss.line);
    expect(Math.abs(calibration.value as number)).toBeLessThan(calibration.line);
  });

  test("reported outcomes, which are always fraud, are no drift", async () => {
    await live(60, "first", "outcome");
    await raiseDriftWarnings(system());
    expect(await warnings()).toEqual([]);
    expect((await showDrift(world.ctx(supervisor, now()))).watched).toBe(700);
    // What the scorer made of them is unlearned again.
    await live(400, "first");
    await raiseDriftWarnings(system());
    for (const { id } of await warnings()) await seeDriftWarning(world.ctx(supervisor, now()), { id });
  });

  test("drift is warned of once, names the signals that moved, and is in the trail", async () => {
    const before = (await warnings()).length;
    await live(300, "turned");
    await raiseDriftWarnings(system());
    await raiseDriftWarnings(system());
    const raised = (await warnings()).slice(0, -before || undefined);
    expect(raised.map(({ kind }) => kind)).toContain("loss");
    expect(new Set(raised.map(({ kind }) => kind)).size).toBe(raised.length);
    const view = await showDrift(world.ctx(supervisor, now()));
    const shown = view.warnings.find(({ kind }) => kind === "loss");
    expect(shown).toMatchObject({ line: 8, seenAt: null, seenByName: null });
    expect(shown?.statistic).toBeGreaterThan(8);
    expect(shown?.detail.direction).toBe("worse");
    expect(shown?.detail.meanLoss).toBeGreaterThan(shown?.detail.promisedLoss as number);
    expect(shown?.detail.scoreShift).toBeGreaterThanOrEqual(0);
    expect(shown?.detail.movedSignals[0]).toMatchObject({
      key: CATALOGUE[MOVING]?.key,
      name: CATALOGUE[MOVING]?.name,
      meanBefore: 0,
    });
    expect(shown?.detail.movedSignals.length).toBeLessThanOrEqual(5);
    const [entry] = await world.db
      .select()
      .from(trail)
      .where(eq(trail.act, "scorer.drift_warned"))
      .orderBy(desc(trail.seq))
      .limit(1);
    expect(entry?.actorKind).toBe("system");
    expect(entry?.facts).toContain(CATALOGUE[MOVING]?.key as string);
  });

  test("whoever may manage scorers says that it was seen, once", async () => {
    const [warning] = await warnings();
    const id = warning?.id as string;
    for (const role of ["reviewer", "auditor", "risk_manager"] as const) {
      const person = await world.person(role);
      await expect(seeDriftWarning(world.ctx(person, now()), { id })).rejects.toMatchObject({
        code: "forbidden",
      });
    }
    await seeDriftWarning(world.ctx(supervisor, now()), { id });
    await expect(seeDriftWarning(world.ctx(supervisor, now()), { id })).rejects.toMatchObject({
      code: "conflict",
    });
    const view = await showDrift(world.ctx(supervisor, now()));
    expect(view.warnings.find((one) => one.id === id)).toMatchObject({
      seenAt: now().toISOString(),
      seenByName: supervisor.name,
    });
    const [entry] = await world.db.select().from(trail).where(eq(trail.act, "scorer.drift_seen")).limit(1);
    expect(entry?.actorId).toBe(supervisor.personId);
  });

  test("after it was seen, the same statistic warns of the next drift", async () => {
    for (const { id, seenAt } of await warnings()) {
      if (!seenAt) await seeDriftWarning(world.ctx(supervisor, now()), { id });
    }
    const before = (await warnings()).length;
    await live(150, "flood");
    await raiseDriftWarnings(system());
    expect((await warnings()).length).toBeGreaterThan(before);
  });

  test("a scorer that takes its place is not warned of for what the one before it lived", async () => {
    const before = (await warnings()).length;
    await inTransaction(world.db, (tx) => rebaseScorer(world.ctx(supervisor, now()), tx, 0.04));
    await live(3, "first");
    await raiseDriftWarnings(system());
    expect((await warnings()).length).toBe(before);
    expect((await showDrift(world.ctx(supervisor, now()))).watched).toBe(3);
  });

  test("an unknown warning is not found", async () => {
    await expect(
      seeDriftWarning(world.ctx(supervisor, now()), { id: "01890000-0000-7000-8000-000000000000" }),
    ).rejects.toMatchObject({ code: "not_found" });
  });
});
