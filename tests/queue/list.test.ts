import { eq, inArray } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { cases } from "@/db/schema/cases";
import { policies } from "@/db/schema/policies";
import { transactions } from "@/db/schema/transactions";
import { assignCase } from "@/lib/cases/assign";
import { claimCase } from "@/lib/cases/claim";
import { casesChanged } from "@/lib/cases/notify";
import { listQueue } from "@/lib/cases/queue";
import { stopRanking } from "@/lib/cases/ranking/ranking";
import { readRug } from "@/lib/cases/rug";
import { QueueInput, QueueView } from "@/lib/cases/schema";
import type { PersonActor } from "@/lib/context";
import { decideCase } from "@/lib/decisions/decide";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

let world: World;
let mira: PersonActor;
let tove: PersonActor;
let supervisor: PersonActor;
let made: string[];

beforeAll(async () => {
  world = await testWorld();
  mira = await world.person("reviewer");
  tove = await world.person("reviewer");
  supervisor = await world.person("supervisor");
  const waiting = await world.waitingCases(37, { seed: 1, amountMinor: 12_345 });
  // Experience of some kind, so that the scores differ.
  for (const [index, { caseId }] of (await world.waitingCases(12, { seed: 2 })).entries()) {
    await decide(caseId, index % 2 === 0);
  }
  made = waiting.map(({ caseId }) => caseId);
  casesChanged(made);
  return () => stopRanking(world.db);
});

const decide = (id: string, fraudulent: boolean, person = supervisor) =>
  decideCase(world.ctx(person), {
    id,
    verdict: fraudulent ? "fraudulent" : "legitimate",
    typology: fraudulent ? "other" : null,
    confidence: "sure",
    seenVersion: 1,
    scoreWasHidden: false,
    together: [],
  });

/** As the HTTP door does: defaults filled in, and the answer held to its schema. */
async function list(query: Record<string, unknown> = {}, person = supervisor): Promise<QueueView> {
  return QueueView.parse(await listQueue(world.ctx(person), QueueInput.parse(query)));
}
const idsOf = ({ items }: QueueView) => items.map(({ caseId }) => caseId);

async function pages(limit: number): Promise<QueueView[]> {
  const all: QueueView[] = [];
  for (let cursor: string | null = ""; cursor !== null; cursor = all.at(-1)?.next ?? null) {
    all.push(await list(cursor === "" ? { limit } : { limit, cursor }));
  }
  return all;
}

describe("the list", () => {
  test("has the best case first and says what a reviewer needs of each", async () => {
    const all = await list();
    expect(new Set(idsOf(all))).toEqual(new Set(made));
    const evidence = all.items.map(({ evidenceDecibans }) => Number(evidenceDecibans));
    expect(evidence).toEqual(evidence.toSorted((a, b) => b - a));
    expect(all).toMatchObject({ total: 37, next: null });
    for (const { probability, evidenceDecibans } of all.items) {
      const odds = Number(probability) / (1 - Number(probability));
      expect(10 * Math.log10(odds)).toBeCloseTo(Number(evidenceDecibans), 6);
    }
    expect(all.items[0]).toMatchObject({ amount: "123.45", currency: "EUR", state: "open", overdue: false });
  });

  test("keeps its order and tells no score while the policy hides scores until the verdict", async () => {
    const order = idsOf(await list());
    const terms = { ...DEFAULT_TERMS, hideScoreUntilVerdict: true };
    await world.db.update(policies).set({ terms }).where(eq(policies.version, 1));
    const hidden = await list();
    await world.db.update(policies).set({ terms: DEFAULT_TERMS }).where(eq(policies.version, 1));
    expect(idsOf(hidden)).toEqual(order);
    for (const item of hidden.items)
      expect(item).toMatchObject({ probability: null, evidenceDecibans: null });
  });

  test("comes in pages that show every case once, in the same order", async () => {
    const all = idsOf(await list());
    for (const limit of [1, 7, 36, 37]) {
      const parts = await pages(limit);
      expect(parts.flatMap(idsOf)).toEqual(all);
      expect(parts.every(({ total }) => total === 37)).toBe(true);
    }
  });

  test("goes on behind the last case seen even when that case is gone by then", async () => {
    const first = await list({ limit: 5 });
    const all = idsOf(await list());
    const last = first.items.at(-1)?.caseId as string;
    await world.db.update(cases).set({ state: "lapsed" }).where(eq(cases.id, last));
    casesChanged([last]);
    expect(idsOf(await list({ limit: 5, cursor: first.next }))).toEqual(all.slice(5, 10));
    await world.db.update(cases).set({ state: "open" }).where(eq(cases.id, last));
    casesChanged([last]);
    expect(idsOf(await list())).toEqual(all);
  });

  test("refuses a cursor that it never gave", async () => {
    for (const cursor of ["nonsense", "eyJ2IjoxfQ", Buffer.from("[]").toString("base64url")]) {
      await expect(list({ cursor })).rejects.toMatchObject({ code: "invalid", errors: [{ path: "cursor" }] });
    }
  });

  test("can be narrowed by zone, channel, state, assignee and search, the total with it", async () => {
    const [one, two, three] = made as [string, string, string];
    const [payment] = await world.db
      .select({ id: transactions.id, accountId: transactions.accountId })
      .from(cases)
      .innerJoin(transactions, eq(transactions.id, cases.transactionId))
      .where(eq(cases.id, one));
    await world.db.update(cases).set({ zone: "hold" }).where(eq(cases.id, one));
    await world.db
      .update(transactions)
      .set({ channel: "instant_transfer", externalId: "Invoice-77-B" })
      .where(eq(transactions.id, payment?.id as string));
    await world.db
      .update(cases)
      .set({ changedAt: new Date() })
      .where(inArray(cases.id, [one]));
    casesChanged([one]);
    await claimCase(world.ctx(mira), { id: two });
    await assignCase(world.ctx(supervisor), { id: three, personId: tove.personId });
    expect(await list({ zone: "hold" })).toMatchObject({ total: 1, items: [{ caseId: one }] });
    expect(idsOf(await list({ channel: "instant_transfer" }))).toEqual([one]);
    expect(await list({ state: "claimed" })).toMatchObject({
      items: [{ caseId: two, claimedBy: { name: mira.name } }],
    });
    expect(idsOf(await list({ assignee: tove.personId }))).toEqual([three]);
    expect((await list({ assignee: "nobody" })).total).toBe(36);
    expect(idsOf(await list({ assignee: "me" }, mira))).toEqual([two]);
    expect(idsOf(await list({ search: "invoice-77" }))).toEqual([one]);
    expect(idsOf(await list({ search: payment?.accountId }))).toEqual([one]);
    const number = (await list({ search: "invoice-77" })).items[0]?.number;
    expect(idsOf(await list({ search: String(number), zone: "hold" }))).toEqual([one]);
    expect(await list({ search: "no such payment" })).toMatchObject({ total: 0, items: [], next: null });
  });

  test("shows a reviewer their own and unassigned cases, a supervisor and an auditor all", async () => {
    const auditor = await world.person("auditor");
    expect((await list({}, auditor)).total).toBe(37);
    expect((await list({}, tove)).total).toBe(37);
    const forMira = await list({}, mira);
    expect(forMira.total).toBe(36);
    expect(idsOf(forMira)).not.toContain(made[2]);
    const administrator = await world.person("administrator");
    await expect(list({}, administrator)).rejects.toMatchObject({ code: "forbidden" });
  });

  test("marks what is past its deadline", async () => {
    const late = await listQueue(
      world.ctx(supervisor, new Date(WORLD_START.getTime() + 25 * 3_600_000)),
      QueueInput.parse({ limit: 1 }),
    );
    expect(late.items[0]?.overdue).toBe(true);
  });

  test("loses a case with its verdict, and is of the scorer's version", async () => {
    const [one] = (await world.waitingCases(1, { seed: 3 })) as [WaitingCase];
    casesChanged([one.caseId]);
    expect((await list()).total).toBe(38);
    const { scorerVersion } = await decide(one.caseId, true);
    const after = await list();
    expect(after).toMatchObject({ total: 37, version: scorerVersion });
    expect(idsOf(after)).not.toContain(one.caseId);
  });
});

test("the rug has a tick for every case on the list, in its order, and the two lines", async () => {
  const [{ items }, rug] = [await list(), await readRug(world.ctx(supervisor))];
  expect(rug.evidenceDecibans).toHaveLength(items.length);
  for (const [index, decibans] of rug.evidenceDecibans.entries()) {
    expect(Math.abs(decibans - (items[index]?.evidenceDecibans as number))).toBeLessThanOrEqual(0.005 + 1e-9);
  }
  expect(rug.holdDecibans).toBeGreaterThanOrEqual(rug.reviewDecibans);
  expect((await readRug(world.ctx(mira))).evidenceDecibans).toHaveLength(items.length - 1);
});
