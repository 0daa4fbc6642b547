import { randomBytes } from "node:crypto";
import { and, eq, inArray } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { createDatabase } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { policies } from "@/db/schema/policies";
import { trail } from "@/db/schema/trail";
import { transactions } from "@/db/schema/transactions";
import { takeNextCase } from "@/lib/cases/next";
import { casesChanged } from "@/lib/cases/notify";
import { listQueue } from "@/lib/cases/queue";
import { stopRanking } from "@/lib/cases/ranking/ranking";
import { releaseCase } from "@/lib/cases/release";
import type { CaseView } from "@/lib/cases/schema";
import type { PersonActor } from "@/lib/context";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { ReplayedAnswer } from "@/lib/write-once";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

const minutes = (count: number) => new Date(WORLD_START.getTime() + count * 60_000);
const days = (count: number) => minutes(count * 24 * 60);

let world: World;
let seed = 1;

beforeAll(async () => {
  world = await testWorld();
  // A line that need not be worked out from the scores for every case shown.
  const terms = { ...DEFAULT_TERMS, reviewThreshold: { kind: "fixed" as const, probability: 0.1 } };
  await world.db.update(policies).set({ terms }).where(eq(policies.version, 1));
  return () => stopRanking(world.db);
});

const next = (person: PersonActor, notThese: string[] = [], at?: Date) =>
  takeNextCase(world.ctx(person, at), { notThese });

/** Nothing waits any longer. */
async function emptyQueue(): Promise<void> {
  const left = await world.db
    .select({ id: cases.id })
    .from(cases)
    .where(inArray(cases.state, ["open", "claimed"]));
  await world.db
    .update(cases)
    .set({ state: "lapsed", claimedBy: null, changedAt: new Date() })
    .where(inArray(cases.state, ["open", "claimed"]));
  casesChanged(left.map(({ id }) => id));
}

async function waitingCases(count: number, options = {}): Promise<WaitingCase[]> {
  const made = await world.waitingCases(count, { seed: seed++, ...options });
  casesChanged(made.map(({ caseId }) => caseId));
  return made;
}

async function change(caseIds: string[], set: Partial<typeof cases.$inferInsert>): Promise<void> {
  await world.db
    .update(cases)
    .set({ ...set, changedAt: new Date() })
    .where(inArray(cases.id, caseIds));
  casesChanged(caseIds);
}

describe("the next case", () => {
  test("is ten different ones for ten people who ask at once, and the ten best", async () => {
    await emptyQueue();
    await waitingCases(40);
    const people = await Promise.all(Array.from({ length: 10 }, () => world.person("reviewer")));
    const auditor = await world.person("auditor");
    const { items } = await listQueue(world.ctx(auditor), { limit: 10 });
    const got = await Promise.all(people.map((person) => next(person)));
    expect(new Set(got.map((view) => view?.caseId)).size).toBe(10);
    for (const [index, view] of got.entries()) {
      expect(view).toMatchObject({
        state: "claimed",
        mine: true,
        claimedBy: { id: people[index]?.personId },
      });
    }
    expect(new Set(got.map((view) => view?.caseId))).toEqual(new Set(items.map(({ caseId }) => caseId)));
  });

  test("is different ones for people on two servers that know nothing of each other", async () => {
    await emptyQueue();
    await waitingCases(12);
    const other = createDatabase(world.url);
    try {
      const people = await Promise.all(Array.from({ length: 10 }, () => world.person("reviewer")));
      const got = await Promise.all(
        people.map((person, index) =>
          takeNextCase({ ...world.ctx(person), db: index % 2 === 0 ? world.db : other.db }, { notThese: [] }),
        ),
      );
      expect(new Set(got.map((view) => view?.caseId)).size).toBe(10);
    } finally {
      stopRanking(other.db);
      await other.close();
    }
  });

  test("is none when nothing waits, and none that the asker has in hand already", async () => {
    await emptyQueue();
    const reviewer = await world.person("reviewer");
    expect(await next(reviewer)).toBeNull();
    const [one] = (await waitingCases(1)) as [WaitingCase];
    expect(await next(reviewer, [one.caseId])).toBeNull();
    expect((await next(reviewer))?.caseId).toBe(one.caseId);
  });

  test("is found although it was opened by a server that could not tell this one", async () => {
    await emptyQueue();
    const reviewer = await world.person("reviewer");
    expect(await next(reviewer)).toBeNull();
    const [one] = (await world.waitingCases(1, { seed: seed++, openedAt: new Date() })) as [WaitingCase];
    expect((await next(reviewer))?.caseId).toBe(one.caseId);
  });

  test("is a hold about to end, the largest first, before anything else", async () => {
    await emptyQueue();
    await waitingCases(5);
    const [small] = (await waitingCases(1, { held: true, amountMinor: 1_000 })) as [WaitingCase];
    const [large] = (await waitingCases(1, { held: true, amountMinor: 90_000 })) as [WaitingCase];
    const reviewer = await world.person("reviewer");
    const almostOver = minutes(24 * 60 - 20);
    expect((await next(reviewer, [], almostOver))?.caseId).toBe(large.caseId);
    expect((await next(reviewer, [], almostOver))?.caseId).toBe(small.caseId);
  });

  test("is an assigned one before those that are anybody's, and never a colleague's", async () => {
    await emptyQueue();
    const made = (await waitingCases(3)) as [WaitingCase, WaitingCase, WaitingCase];
    const [mira, tove] = [await world.person("reviewer"), await world.person("reviewer")];
    const [first, second, third] = made.map(({ caseId }) => caseId) as [string, string, string];
    await change([third], { assignedTo: mira.personId });
    await change([first], { assignedTo: tove.personId });
    expect((await next(mira))?.caseId).toBe(third);
    expect((await next(mira))?.caseId).toBe(second);
    expect(await next(mira)).toBeNull();
  });

  test("is an escalated one for a supervisor alone", async () => {
    await emptyQueue();
    const [one] = (await waitingCases(1)) as [WaitingCase];
    await change([one.caseId], { state: "escalated", escalatedAt: WORLD_START });
    expect(await next(await world.person("reviewer"))).toBeNull();
    expect((await next(await world.person("supervisor")))?.caseId).toBe(one.caseId);
  });

  test("is claimed once when the same request is sent twice, and answered twice", async () => {
    await emptyQueue();
    await waitingCases(4);
    const reviewer = await world.person("reviewer");
    const idempotency = { key: "next-1", requestHash: randomBytes(32) };
    const ask = async () => {
      try {
        return await takeNextCase({ ...world.ctx(reviewer), idempotency }, { notThese: [] });
      } catch (error) {
        if (error instanceof ReplayedAnswer) return error.answer as CaseView;
        throw error;
      }
    };
    const [one, two] = await Promise.all([ask(), ask()]);
    expect(one).toEqual(two);
    const held = await world.db.select().from(cases).where(eq(cases.claimedBy, reviewer.personId));
    expect(held).toHaveLength(1);
  });
});

// Slow on a busy machine, and nothing here is about time.
describe("over two hundred hand-outs", { timeout: 240_000 }, () => {
  test("every fifth is overdue and every twentieth a sample, whatever the order says", async () => {
    await emptyQueue();
    const overdue = new Set((await waitingCases(80, { openedAt: days(-3) })).map(({ caseId }) => caseId));
    const samples = (await waitingCases(20)).map(({ caseId }) => caseId);
    await change(samples, { kind: "sample", sampleProbability: 0.03 });
    await waitingCases(200);
    const reviewer = await world.person("reviewer");
    for (let round = 0; round < 200; round++) {
      const view = (await next(reviewer)) as CaseView;
      await change([view.caseId], { state: "lapsed", claimedBy: null });
    }
    const entries = await world.db
      .select({ caseId: trail.caseId, facts: trail.facts })
      .from(trail)
      .where(and(eq(trail.act, "case.handed_out"), eq(trail.actorId, reviewer.personId)));
    const served = entries.map(({ caseId, facts }) => ({ caseId, share: JSON.parse(facts).share }));
    expect(served).toHaveLength(200);
    const of = (share: string) => served.filter((one) => one.share === share);
    // The fortieth turn of the overdue falls together with a sample's, on the last hand-out.
    expect(of("overdue")).toHaveLength(39);
    expect(of("sample")).toHaveLength(10);
    for (const { caseId } of of("overdue")) expect(overdue.has(caseId as string)).toBe(true);
    for (const { caseId } of of("sample")) expect(samples).toContain(caseId);
    // In the order they arrived, whatever their score; some were the best of the list and are gone before.
    const places = of("sample").map(({ caseId }) => samples.indexOf(caseId as string));
    expect(places).toEqual(places.toSorted((a, b) => a - b));
  });

  test("holds about to end do not use the shares up", async () => {
    await emptyQueue();
    const almostOver = minutes(24 * 60 - 20);
    await waitingCases(4, { held: true });
    const [late] = (await waitingCases(1, { openedAt: days(-5) })) as [WaitingCase];
    await waitingCases(20, { openedAt: days(1) });
    const reviewer = await world.person("reviewer");
    const got: string[] = [];
    for (let round = 0; round < 9; round++) {
      const view = (await next(reviewer, [], almostOver)) as CaseView;
      got.push(view.caseId);
      await change([view.caseId], { state: "lapsed", claimedBy: null });
    }
    expect(got.indexOf(late.caseId)).toBe(8);
  });
});

test("a claim given back can be handed out again at once", async () => {
  await emptyQueue();
  const [one] = (await waitingCases(1)) as [WaitingCase];
  const [mira, tove] = [await world.person("reviewer"), await world.person("reviewer")];
  await next(mira);
  expect(await next(tove)).toBeNull();
  await releaseCase(world.ctx(mira), { id: one.caseId });
  expect((await next(tove))?.caseId).toBe(one.caseId);
  const [payment] = await world.db.select().from(transactions).where(eq(transactions.id, one.transactionId));
  expect(payment?.paymentState).toBe("settled");
});
