import { asc, count, eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { createDatabase } from "@/db/client";
import { candidateLosses } from "@/db/schema/learning";
import { labelLog, scorers } from "@/db/schema/scorers";
import { inTransaction } from "@/db/tx";
import type { PersonActor } from "@/lib/context";
import { lockCandidate } from "@/lib/learning/candidate";
import { createCandidate } from "@/lib/learning/create-candidate";
import { dropCandidate } from "@/lib/learning/drop-candidate";
import { foldLog } from "@/lib/learning/fold";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { CandidateInput } from "@/lib/learning/learning-schema";
import { rebaseScorer } from "@/lib/learning/rebase";
import { followLog } from "@/lib/learning/shadow";
import { takeInRows } from "@/lib/learning/take-in";
import { createScorer } from "@/lib/scorer";
import { signalSetOfScorer } from "@/lib/signals/read-signal-set";
import { testWorld, type World } from "../support/world";
import { LONG_LIFE_MS, mixedLife } from "./mixed-life";

let world: World;
let supervisor: PersonActor;
let life: Awaited<ReturnType<typeof mixedLife>>;

beforeAll(async () => {
  world = await testWorld();
  life = await mixedLife(world, 11);
  supervisor = life.supervisor;
});

const add = (name: string, method: CandidateInput["method"], options: CandidateInput["options"] = {}) =>
  createCandidate(world.ctx(supervisor, life.later()), CandidateInput.parse({ name, method, options }));

const system = (db = world.db) => ({
  ...world.ctx({ kind: "system", job: "test" }, life.later()),
  db,
});
const follow = (db = world.db) => followLog(system(db), new AbortController().signal);

async function rowOf(id: string) {
  const [row] = await world.db.select().from(scorers).where(eq(scorers.id, id));
  if (!row) throw new Error("The candidate is not there");
  return row;
}

const lossesOf = (id: string) =>
  world.db
    .select({
      seq: candidateLosses.seq,
      loss: candidateLosses.loss,
      probability: candidateLosses.probability,
    })
    .from(candidateLosses)
    .where(eq(candidateLosses.scorerId, id))
    .orderBy(asc(candidateLosses.seq));

/** Losses of the scores that were given, and the label that came. */
const lived = () =>
  world.db
    .select({ seq: labelLog.seq, loss: labelLog.loss, label: labelLog.label, place: labelLog.place })
    .from(labelLog)
    .orderBy(asc(labelLog.seq))
    .then((rows) => rows.filter(({ place }) => place === null));

async function expectFolded(id: string): Promise<void> {
  const row = await rowOf(id);
  const signals = await signalSetOfScorer(world.db, row);
  const from = { scorer: createScorer(row.options), place: 0, signals };
  const { scorer } = await foldLog(world.db, from, row.logSeq);
  expect(row.state.equals(Buffer.from(scorer.snapshot()))).toBe(true);
}

describe("a candidate", () => {
  test(
    "lives the log from its first row and comes to the fold of it, bit for bit",
    async () => {
      // Snapshots are kept every two hundred labels: what is replaced lies on both sides of one.
      await life.begin(170);
      await life.live(25);
      const early = await add("Six together", "aggregate");
      const twin = await add("The same again", "improper");
      expect(early).toMatchObject({ role: "candidate", method: "aggregate" });
      expect((await rowOf(twin.id)).logSeq).toBe(0);
      for (let round = 0; round < 3; round++) {
        await life.live(20);
        await follow();
      }
      const held = await readScorerInUse(world.db);
      for (const { id } of [early, twin]) {
        expect(await rowOf(id)).toMatchObject({ logSeq: held.logSeq, role: "candidate" });
        await expectFolded(id);
      }
      expect((await rowOf(twin.id)).state.equals(Buffer.from(held.scorer.snapshot()))).toBe(true);
    },
    LONG_LIFE_MS,
  );

  test("with the options of the scorer in use has lost exactly what that one lost", async () => {
    const [twin] = await world.db.select().from(scorers).where(eq(scorers.name, "The same again"));
    const booked = await lossesOf(twin?.id ?? "");
    const inUse = await lived();
    expect(booked.map(({ seq, loss }) => ({ seq, loss }))).toEqual(
      inUse.map(({ seq, loss }) => ({ seq, loss })),
    );
    const held = await readScorerInUse(world.db);
    expect(Object.is(twin?.cumulativeLoss, held.cumulativeLoss)).toBe(true);
    for (const [index, { probability, loss }] of booked.entries()) {
      const given = inUse[index]?.label === 1 ? probability : 1 - probability;
      expect(-Math.log(given)).toBeCloseTo(loss, 9);
    }
  });

  test("that stopped half-way goes on where it was, however the log is cut into turns", async () => {
    const { id } = await add("In pieces", "implicit");
    for (let turn = 0; turn < 30; turn++) {
      await inTransaction(world.db, async (tx) => {
        const held = await lockCandidate(tx, id);
        if (held) await takeInRows(tx, held, life.later(), 1 + (turn % 4));
      });
    }
    const before = await rowOf(id);
    const crash = inTransaction(world.db, async (tx) => {
      const held = await lockCandidate(tx, id);
      if (held) await takeInRows(tx, held, life.later(), 25);
      throw new Error("The server stops here");
    });
    await expect(crash).rejects.toThrow("The server stops here");
    expect(await rowOf(id)).toEqual(before);
    expect((await lossesOf(id)).at(-1)?.seq ?? 0).toBeLessThanOrEqual(before.logSeq);
    await follow();
    await expectFolded(id);
    expect(await lossesOf(id)).toHaveLength((await lived()).length);
  });

  test("is brought forward by two servers at once without booking a row twice", async () => {
    const { id } = await add("Shared work", "gradient");
    const second = createDatabase(world.url, 4);
    try {
      await Promise.all([follow(), follow(second.db), follow(), follow(second.db)]);
    } finally {
      await second.close();
    }
    await follow();
    await expectFolded(id);
    expect((await lossesOf(id)).map(({ seq }) => seq)).toEqual((await lived()).map(({ seq }) => seq));
  });

  test("does nothing once the server is asked to stop", async () => {
    const { id } = await add("Stopped", "newton");
    const controller = new AbortController();
    controller.abort();
    await followLog(system(), controller.signal);
    expect((await rowOf(id)).logSeq).toBe(0);
  });
});

describe("adding and dropping", () => {
  test("five run at most, each with a name of its own", async () => {
    await expect(add("A sixth", "improper")).rejects.toMatchObject({ code: "rule_broken" });
    const [stopped] = await world.db.select().from(scorers).where(eq(scorers.name, "Stopped"));
    await dropCandidate(world.ctx(supervisor, life.later()), { id: stopped?.id ?? "" });
    expect((await rowOf(stopped?.id ?? "")).role).toBe("dropped");
    await expect(add("six together", "improper")).rejects.toMatchObject({ code: "conflict" });
    await expect(
      dropCandidate(world.ctx(supervisor, life.later()), { id: stopped?.id ?? "" }),
    ).rejects.toMatchObject({ code: "conflict" });
  });

  test("an option out of range or of another method is named", async () => {
    await expect(add("Odd", "improper", { regularization: -1 })).rejects.toMatchObject({
      code: "invalid",
      errors: [{ path: "options.regularization" }],
    });
    await expect(add("Odd", "gradient", { forgetting: 0.9 })).rejects.toMatchObject({
      code: "invalid",
      errors: [{ path: "options.forgetting" }],
    });
    await expect(add("Odd", "leader")).rejects.toMatchObject({ errors: [{ path: "method" }] });
  });

  test("only a supervisor adds or drops", async () => {
    const riskManager = await world.person("risk_manager");
    const input = CandidateInput.parse({ name: "Mine", method: "improper" });
    await expect(createCandidate(world.ctx(riskManager), input)).rejects.toMatchObject({ code: "forbidden" });
  });
});

test(
  "a new base rate lets every candidate begin anew from it",
  async () => {
    const before = await world.db.select().from(scorers).where(eq(scorers.role, "candidate"));
    await inTransaction(world.db, (tx) => rebaseScorer(world.ctx(supervisor, life.later()), tx, 0.04));
    await life.live(10);
    await follow();
    const held = await readScorerInUse(world.db);
    const after = await world.db.select().from(scorers).where(eq(scorers.role, "candidate"));
    expect(after.map(({ name }) => name).sort()).toEqual(before.map(({ name }) => name).sort());
    for (const row of after) {
      expect(row.options.offset).toBe(held.scorer.options.offset);
      expect(row.logSeq).toBe(held.logSeq);
      await expectFolded(row.id);
    }
    const [dropped] = await world.db
      .select({ count: count() })
      .from(scorers)
      .where(eq(scorers.role, "dropped"));
    expect(dropped?.count).toBe(before.length + 1);
  },
  LONG_LIFE_MS,
);
