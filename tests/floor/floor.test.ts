import { eq, inArray } from "drizzle-orm";
import { beforeAll, expect, test } from "vitest";
import { cases, decisions } from "@/db/schema/cases";
import { transactions } from "@/db/schema/transactions";
import { listFloorCases } from "@/lib/floor/list-cases";
import { floorView } from "@/lib/floor/read";
import { FloorCasesInput } from "@/lib/floor/schema";
import { newId } from "@/lib/new-id";
import { testWorld, type WaitingCase, WORLD_START } from "../support/world";

const world = await testWorld();
const { db } = world;
const anna = await world.person("reviewer");
const bert = await world.person("reviewer");
const chief = await world.person("supervisor");
const clerk = await world.person("administrator");
const hours = (n: number) => new Date(WORLD_START.getTime() + n * 3_600_000);
/** 23 hours in: cases with a deadline after 24 hours are not overdue yet. */
const now = hours(23);
const lease = { claimedAt: now, claimExpiresAt: hours(24) };

/** A small floor made by hand; every number below is counted from this list. */
let all: WaitingCase[];
beforeAll(async () => {
  all = [
    ...(await world.waitingCases(6, { seed: 1, amountMinor: 10_000 })),
    ...(await world.waitingCases(3, { seed: 2, amountMinor: 70_000, held: true })),
  ];
  await set(0, { dueAt: hours(1), openedAt: hours(-5) });
  await set(1, {
    state: "claimed",
    claimedBy: anna.personId,
    assignedTo: anna.personId,
    ...lease,
    dueAt: hours(2),
  });
  await set(2, {
    state: "claimed",
    claimedBy: anna.personId,
    assignedTo: bert.personId,
    ...lease,
    dueAt: hours(3),
  });
  await set(3, { state: "waiting", assignedTo: bert.personId, waitUntil: hours(30) });
  await set(4, { state: "escalated", escalatedAt: hours(3) });
  await set(5, { state: "decided", decidedAt: hours(20) });
  await pay(4, { channel: "cash_withdrawal" });
  await pay(6, { holdExpiresAt: new Date(now.getTime() + 30 * 60_000) });
  await pay(7, { holdExpiresAt: new Date(now.getTime() + 31 * 60_000) });
  await pay(8, { holdExpiresAt: new Date(now.getTime() + 60_000), paymentState: "released" });
  await decide(5, anna.personId, hours(20));
  await decide(0, anna.personId, hours(-10));
  await decide(1, bert.personId, hours(19), hours(19.1));
});

const at = (index: number) => all[index] as WaitingCase;
const set = (index: number, change: Partial<typeof cases.$inferInsert>) =>
  db
    .update(cases)
    .set(change)
    .where(eq(cases.id, at(index).caseId));
const pay = (index: number, change: Partial<typeof transactions.$inferInsert>) =>
  db
    .update(transactions)
    .set(change)
    .where(eq(transactions.id, at(index).transactionId));

async function decide(index: number, personId: string, decidedAt: Date, undoneAt: Date | null = null) {
  const { caseId, transactionId, scoreId } = at(index);
  await db.insert(decisions).values({
    id: newId(),
    caseId,
    transactionId,
    kind: "decision",
    personId,
    verdict: "legitimate",
    confidence: "sure",
    decidedAt,
    undoUntil: decidedAt,
    undoneAt,
    scoreId,
    evidence: Buffer.alloc(8),
    scorerVersionBefore: 1,
    scorerVersionAfter: 2,
    policyVersion: 1,
    zone: "review",
    actId: newId(),
    handlingSeconds: 60,
  });
}

test("the floor counts what waits, where, and how urgently", async () => {
  const view = await floorView(db, now);
  expect(view).toMatchObject({
    total: 8,
    overdue: 3,
    expiringHolds: 1,
    byState: { open: 4, claimed: 2, waiting: 1, escalated: 1 },
    oldestOpenedAt: hours(-5).toISOString(),
    expiringMinutes: 30,
    decidedToday: 1,
    dailyCapacity: 120,
  });
  expect(view.byZone).toEqual([
    { zone: "pass", total: 0, overdue: 0, expiringHolds: 0 },
    { zone: "review", total: 5, overdue: 3, expiringHolds: 0 },
    { zone: "hold", total: 3, overdue: 0, expiringHolds: 1 },
  ]);
  expect(view.byChannel.filter(({ total }) => total > 0)).toEqual([
    { channel: "card_remote", total: 7, overdue: 3, expiringHolds: 1 },
    { channel: "cash_withdrawal", total: 1, overdue: 0, expiringHolds: 0 },
  ]);
});

test("each person's row says what they hold, what is theirs and late, and what they did today", async () => {
  const { people } = await floorView(db, now);
  const row = (id: string) => people.find((person) => person.id === id);
  expect(row(anna.personId)).toMatchObject({ claimed: 2, assigned: 1, overdue: 2, decidedToday: 1 });
  expect(row(bert.personId)).toMatchObject({ claimed: 0, assigned: 2, overdue: 1, decidedToday: 0 });
  expect(row(chief.personId)).toMatchObject({ claimed: 0, assigned: 0, overdue: 0, decidedToday: 0 });
  expect(row(clerk.personId)).toBeUndefined();
});

test("today begins at midnight where the asker is", async () => {
  // 10:00 UTC on 2 March, when Auckland's 2 March (13 hours ahead) is 23 hours old: the verdict of 23:00 UTC on
  // 1 March belongs to it.
  expect((await floorView(db, hours(1), "UTC")).decidedToday).toBe(0);
  expect((await floorView(db, hours(1), "Pacific/Auckland")).decidedToday).toBe(1);
  // An hour and a bit later it is 3 March there.
  expect((await floorView(db, hours(2.1), "Pacific/Auckland")).decidedToday).toBe(0);
});

const list = (input: Partial<FloorCasesInput>) =>
  listFloorCases(world.ctx(chief, now), FloorCasesInput.parse(input));
const indexes = (view: { items: { caseId: string }[] }) =>
  view.items.map(({ caseId }) => all.findIndex((one) => one.caseId === caseId));

test("the list is filtered by state, zone, channel, person and concern", async () => {
  expect(indexes(await list({ state: "claimed" }))).toEqual([1, 2]);
  expect(indexes(await list({ zone: "hold" }))).toEqual([6, 7, 8]);
  expect(indexes(await list({ channel: "cash_withdrawal" }))).toEqual([4]);
  expect(indexes(await list({ person: bert.personId }))).toEqual([2, 3]);
  expect(indexes(await list({ person: "nobody" }))).toEqual([0, 4, 6, 7, 8]);
  expect(indexes(await list({ concern: "overdue" }))).toEqual([0, 1, 2]);
  expect(indexes(await list({ concern: "expiring" }))).toEqual([6]);
  expect((await list({ concern: "overdue", state: "claimed" })).total).toBe(2);
});

test("the list is searched by number and by the start of an external id or account", async () => {
  const { items } = await list({});
  const number = String(items[3]?.number);
  expect((await list({ search: number })).items.map((item) => String(item.number))).toContain(number);
  expect(indexes(await list({ search: "ACC-2-" }))).toEqual([6, 7, 8]);
  expect(indexes(await list({ search: at(4).transactionId }))).toEqual([4]);
  expect((await list({ search: "%" })).total).toBe(0);
});

test("the list is sorted both ways, and its pages meet without gap or overlap", async () => {
  expect(indexes(await list({ sort: "hold" })).slice(0, 2)).toEqual([6, 7]);
  expect(indexes(await list({ sort: "opened" }))[0]).toBe(0);
  for (const sort of ["due", "opened", "amount", "hold", "number"] as const) {
    for (const direction of ["ascending", "descending"] as const) {
      const whole = indexes(await list({ sort, direction }));
      const inPages: number[] = [];
      for (let cursor: string | undefined; ; ) {
        const page = await list({ sort, direction, limit: 3, ...(cursor && { cursor }) });
        inPages.push(...indexes(page));
        if (!page.next) break;
        cursor = page.next;
      }
      expect(inPages, `${sort} ${direction}`).toEqual(whole);
      expect(whole).toHaveLength(8);
    }
  }
  await expect(list({ cursor: "bm90IG9uZQ" })).rejects.toMatchObject({ errors: [{ path: "cursor" }] });
});

test("an item says whose it is, and until when its payment is held", async () => {
  const { items } = await list({ zone: "hold", sort: "number" });
  expect(items[0]).toMatchObject({
    amount: "700.00",
    currency: "EUR",
    holdExpiresAt: new Date(now.getTime() + 30 * 60_000).toISOString(),
    overdue: false,
  });
  expect(items[2]?.holdExpiresAt).toBeNull();
  const [mine] = (await list({ state: "claimed", sort: "number" })).items;
  expect(mine).toMatchObject({ claimedBy: { id: anna.personId, name: anna.name }, overdue: true });
});

test("the floor belongs to supervisors", async () => {
  await expect(listFloorCases(world.ctx(anna, now), FloorCasesInput.parse({}))).rejects.toMatchObject({
    code: "forbidden",
  });
  expect(
    await db
      .select({ id: cases.id })
      .from(cases)
      .where(inArray(cases.state, ["lapsed"])),
  ).toEqual([]);
});
