import { eq, sql } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { createDatabase, type Database } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { ChangeWatch } from "@/lib/cases/ranking/change-watch";
import { RankingModel } from "@/lib/cases/ranking/model";
import { fillGaps, gapsBehind, joinGaps } from "@/lib/cases/ranking/number-gaps";
import { testWorld, type WaitingCase, type World } from "../support/world";

let world: World;
let other: { db: Database; close: () => Promise<void> };
let seed = 1;

beforeAll(async () => {
  world = await testWorld();
  other = createDatabase(world.url, 4);
  return () => other.close();
});

const LONG_AGO = new Date("2026-01-05T08:00:00.000Z");
const START = new Date("2026-03-02T09:00:00.000Z");
const later = (ms: number) => new Date(START.getTime() + ms);
const waiting = (count: number, openedAt = LONG_AGO) => world.waitingCases(count, { seed: seed++, openedAt });

type Row = typeof cases.$inferSelect;
const rowOf = async ({ caseId }: WaitingCase) =>
  (await world.db.select().from(cases).where(eq(cases.id, caseId)))[0] as Row;

/** Leaves the case's number without a case, as while the transaction that was given it has not committed. */
async function withhold(one: WaitingCase): Promise<() => Promise<unknown>> {
  const row = await rowOf(one);
  await world.db.delete(cases).where(eq(cases.id, one.caseId));
  return () => world.db.insert(cases).values(row);
}

const idsIn = (model: RankingModel) =>
  model.read(new Date(), (view) => Array.from({ length: view.size }, (_, index) => view.caseAt(index).id));

describe("two servers on one database", () => {
  test("a case that was stamped long before it was committed appears on the other", async () => {
    await waiting(3);
    const [here, there] = [new RankingModel(world.db), new RankingModel(other.db)];
    for (const model of [here, there]) {
      await idsIn(model);
      await model.catchUp([], true);
    }
    const [fresh] = (await waiting(1)) as [WaitingCase];
    await here.catchUp([fresh.caseId]);
    expect(await idsIn(here)).toContain(fresh.caseId);
    expect(await idsIn(there)).not.toContain(fresh.caseId);
    await there.catchUp([], true);
    expect(await idsIn(there)).toContain(fresh.caseId);
  });

  test("so does one that was committed after cases with higher numbers, whether a server began before or after those", async () => {
    const early = new RankingModel(other.db);
    await idsIn(early);
    const [, second, , fourth] = (await waiting(5)) as [WaitingCase, WaitingCase, WaitingCase, WaitingCase];
    const commits = [await withhold(second), await withhold(fourth)];
    await early.catchUp([], true);
    const late = new RankingModel(other.db);
    for (const model of [early, late]) {
      expect(await idsIn(model)).not.toContain(second.caseId);
      await model.catchUp([], true);
    }
    for (const commit of commits) await commit();
    for (const model of [early, late]) {
      await model.catchUp([], true);
      expect(await idsIn(model)).toEqual(expect.arrayContaining([second.caseId, fourth.caseId]));
    }
  });
});

describe("the watch on changes", () => {
  async function settledAt(at: Date): Promise<ChangeWatch> {
    const watch = await ChangeWatch.begin(world.db, at);
    watch.settle(await watch.look(world.db, at));
    return watch;
  }
  const look = async (watch: ChangeWatch, at: Date) => {
    const found = await watch.look(world.db, at);
    watch.settle(found);
    return found.rows.map(({ id }) => id);
  };

  test("finds an act that waited a minute for its lock within five seconds, and not at every look", async () => {
    const [one] = (await waiting(1)) as [WaitingCase];
    const watch = await settledAt(START);
    await world.db
      .update(cases)
      .set({ state: "escalated", revision: sql`${cases.revision} + 1`, changedAt: later(-60_000) })
      .where(eq(cases.id, one.caseId));
    expect(await look(watch, later(250))).not.toContain(one.caseId);
    expect(await look(watch, later(4_999))).not.toContain(one.caseId);
    expect(await look(watch, later(5_000))).toContain(one.caseId);
    expect(await look(watch, later(5_250))).not.toContain(one.caseId);
  });

  test("finds again what was found and not taken in", async () => {
    const watch = await settledAt(START);
    const [one] = (await waiting(1)) as [WaitingCase];
    await watch.look(world.db, later(250));
    expect(await look(watch, later(500))).toContain(one.caseId);
    expect(await look(watch, later(750))).not.toContain(one.caseId);
  });

  test("looks for a missing number for ten minutes and then gives it up", async () => {
    const watch = await settledAt(START);
    const [first, , third] = (await waiting(4)) as [WaitingCase, WaitingCase, WaitingCase];
    const [commitFirst, commitThird] = [await withhold(first), await withhold(third)];
    await look(watch, later(1_000));
    await commitFirst();
    expect(await look(watch, later(600_000))).toContain(first.caseId);
    await look(watch, later(601_000));
    await commitThird();
    expect(await look(watch, later(602_000))).not.toContain(third.caseId);
  });
});

describe("gaps in the numbers", () => {
  const at = START;

  test("are the numbers that no case has between those seen", () => {
    expect(gapsBehind(4, [5, 6, 9, 10, 12], at)).toEqual([
      { first: 7, last: 8, foundAt: at },
      { first: 11, last: 11, foundAt: at },
    ]);
    expect(gapsBehind(4, [], at)).toEqual([]);
  });

  test("shrink and part as their numbers turn up", () => {
    const gaps = [
      { first: 3, last: 7, foundAt: at },
      { first: 9, last: 9, foundAt: later(5) },
    ];
    expect(fillGaps(gaps, [5, 9])).toEqual([
      { first: 3, last: 4, foundAt: at },
      { first: 6, last: 7, foundAt: at },
    ]);
    expect(fillGaps(gaps, [])).toEqual(gaps);
  });

  test("are joined with their neighbours when there are many, and none is forgotten", () => {
    const gaps = [1, 3, 5, 7, 9].map((number) => ({ first: number, last: number, foundAt: later(number) }));
    const joined = joinGaps(gaps, 2);
    expect(joined).toEqual([
      { first: 1, last: 7, foundAt: later(7) },
      { first: 9, last: 9, foundAt: later(9) },
    ]);
  });
});
