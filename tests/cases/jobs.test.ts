import { eq, inArray } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { createDatabase } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { trail } from "@/db/schema/trail";
import { transactions } from "@/db/schema/transactions";
import { bringBackDueCases } from "@/lib/cases/bring-back";
import { claimCase } from "@/lib/cases/claim";
import { escalateCase } from "@/lib/cases/escalate";
import { expireHolds } from "@/lib/cases/expire-holds";
import { lapseUnreachedCases } from "@/lib/cases/lapse";
import { stopRanking } from "@/lib/cases/ranking/ranking";
import { caseView } from "@/lib/cases/read";
import { saveDraft } from "@/lib/cases/save-draft";
import { setCaseWaiting } from "@/lib/cases/wait";
import type { Context, PersonActor } from "@/lib/context";
import { decideCase } from "@/lib/decisions/decide";
import type { DecideInput } from "@/lib/decisions/schema";
import { undoDecision } from "@/lib/decisions/undo";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

let world: World;
let mira: PersonActor;
let supervisor: PersonActor;
let seed = 1;

beforeAll(async () => {
  world = await testWorld();
  mira = await world.person("reviewer");
  supervisor = await world.person("supervisor");
  return () => stopRanking(world.db);
});

const minutes = (count: number) => new Date(WORLD_START.getTime() + count * 60_000);
const days = (count: number) => minutes(count * 24 * 60);
const { signal } = new AbortController();
const job = (at: Date): Context => world.ctx({ kind: "system", job: "test" }, at);
const waiting = (count: number, options = {}) => world.waitingCases(count, { seed: seed++, ...options });
const one = async (options = {}) => ((await waiting(1, options)) as [WaitingCase])[0];
const rowOf = async (id: string) => (await world.db.select().from(cases).where(eq(cases.id, id)))[0];
const paymentOf = async ({ transactionId }: WaitingCase) =>
  (await world.db.select().from(transactions).where(eq(transactions.id, transactionId)))[0];
const batches = async (act: string) => world.db.select().from(trail).where(eq(trail.act, act));

const decide = (id: string, person = mira, at = WORLD_START, together: DecideInput["together"] = []) =>
  decideCase(world.ctx(person, at), {
    id,
    verdict: "fraudulent",
    typology: "other",
    confidence: "sure",
    seenVersion: 1,
    scoreWasHidden: false,
    together,
  });

describe("when a lease runs out", () => {
  test("the case goes back to everybody, its holder's half-written note is kept, and the trail says whose it was", async () => {
    const { caseId } = await one();
    await claimCase(world.ctx(mira), { id: caseId });
    await saveDraft(world.ctx(mira), { id: caseId, body: "They say the card" });
    await bringBackDueCases(job(minutes(9)), signal);
    expect(await rowOf(caseId)).toMatchObject({ state: "claimed" });
    await bringBackDueCases(job(minutes(10)), signal);
    expect(await rowOf(caseId)).toMatchObject({ state: "open", claimedBy: null, revision: 3 });
    const view = await caseView(world.ctx(mira, minutes(11)), { id: caseId });
    expect(view.draft).toBe("They say the card");
    expect(view.timeline.at(-1)).toMatchObject({
      act: "case.lease_expired",
      detail: `claim of ${mira.name}`,
    });
  });

  test("a supervisor's escalated case goes back to the supervisors", async () => {
    const { caseId } = await one();
    await claimCase(world.ctx(mira), { id: caseId });
    await escalateCase(world.ctx(mira), { id: caseId, note: "Too large for me" });
    await claimCase(world.ctx(supervisor), { id: caseId });
    await bringBackDueCases(job(minutes(10)), signal);
    expect(await rowOf(caseId)).toMatchObject({ state: "escalated", claimedBy: null });
  });
});

test("a case set aside comes back to its reviewer when its time has come, and not before", async () => {
  const { caseId } = await one();
  await claimCase(world.ctx(mira), { id: caseId });
  await setCaseWaiting(world.ctx(mira), {
    id: caseId,
    until: minutes(60).toISOString(),
    note: "Calls back at ten",
  });
  await bringBackDueCases(job(minutes(59)), signal);
  expect(await rowOf(caseId)).toMatchObject({ state: "waiting" });
  await bringBackDueCases(job(minutes(60)), signal);
  expect(await rowOf(caseId)).toMatchObject({ state: "open", waitUntil: null, assignedTo: mira.personId });
});

test("two servers that sweep at once bring each case back once", async () => {
  const made = await waiting(120);
  await world.db
    .update(cases)
    .set({ state: "waiting", waitUntil: minutes(5) })
    .where(
      inArray(
        cases.id,
        made.map(({ caseId }) => caseId),
      ),
    );
  const other = createDatabase(world.url, 4);
  try {
    await Promise.all([
      bringBackDueCases(job(minutes(6)), signal),
      bringBackDueCases({ ...job(minutes(6)), db: other.db }, signal),
    ]);
    // A locked row is left for the next round.
    await bringBackDueCases(job(minutes(6)), signal);
  } finally {
    await other.close();
  }
  for (const { caseId } of made) expect(await rowOf(caseId)).toMatchObject({ state: "open", revision: 2 });
});

describe("when a hold ends undecided", () => {
  test("the payment is released or refused as its channel's rule told the sender, with one trail entry for the batch", async () => {
    const [card, transfer, early] = [
      await one({ held: true }),
      await one({ held: true }),
      await one({ held: true }),
    ];
    const set = (one: WaitingCase, values: Partial<typeof transactions.$inferInsert>) =>
      world.db.update(transactions).set(values).where(eq(transactions.id, one.transactionId));
    await set(transfer, { channel: "credit_transfer" });
    await set(early, { holdExpiresAt: days(9) });
    await expireHolds(job(days(1)), signal);
    expect(await paymentOf(card)).toMatchObject({ paymentState: "refused" });
    expect(await paymentOf(transfer)).toMatchObject({ paymentState: "released" });
    expect(await paymentOf(early)).toMatchObject({ paymentState: "held" });
    expect(await rowOf(card.caseId)).toMatchObject({ state: "open", revision: 2 });
    const entries = await batches("holds.expired");
    expect(entries).toHaveLength(1);
    expect(JSON.parse(entries[0]?.facts as string)).toEqual({
      count: 2,
      released: [transfer.transactionId],
      refused: [card.transactionId],
    });
    await expireHolds(job(days(1)), signal);
    expect(await batches("holds.expired")).toHaveLength(1);
  });

  test("a payment that somebody decided is left to the decision", async () => {
    const held = await one({ held: true });
    await decide(held.caseId);
    await expireHolds(job(days(2)), signal);
    expect((await paymentOf(held))?.paymentState).toBe("held");
  });
});

describe("when nobody reaches an alert in its lifetime", () => {
  test("it lapses unlabelled, while samples, held payments and cases in somebody's hands stay", async () => {
    const [alert, sample, held, waits] = [await one(), await one(), await one({ held: true }), await one()];
    const assigned = await one();
    await world.db.update(cases).set({ assignedTo: mira.personId }).where(eq(cases.id, assigned.caseId));
    await world.db
      .update(cases)
      .set({ kind: "sample", sampleProbability: 0.03 })
      .where(eq(cases.id, sample.caseId));
    await world.db
      .update(cases)
      .set({ state: "waiting", waitUntil: days(20), assignedTo: mira.personId })
      .where(eq(cases.id, waits.caseId));
    await lapseUnreachedCases(job(new Date(days(14).getTime() - 1)), signal);
    expect(await rowOf(alert.caseId)).toMatchObject({ state: "open" });
    await lapseUnreachedCases(job(days(14)), signal);
    expect(await rowOf(alert.caseId)).toMatchObject({ state: "lapsed", decidedAt: null });
    expect((await paymentOf(alert))?.label).toBeNull();
    for (const { caseId } of [sample, held, assigned])
      expect(await rowOf(caseId)).toMatchObject({ state: "open" });
    expect(await rowOf(waits.caseId)).toMatchObject({ state: "waiting" });
    const [entry] = await batches("cases.lapsed");
    expect(JSON.parse(entry?.facts as string).caseIds).toContain(alert.caseId);
    const view = await caseView(world.ctx(mira, days(15)), { id: alert.caseId });
    expect(view.timeline.at(-1)).toMatchObject({ act: "case.lapsed", by: "Cupel" });
  });
});

test("a case that was opened to be decided together with another, and then undone, lapses as alerts do", async () => {
  const [main, sibling] = (await waiting(2, { accountId: "ACC-TOGETHER" })) as [WaitingCase, WaitingCase];
  await world.db.delete(cases).where(eq(cases.id, sibling.caseId));
  const { transactionId } = sibling;
  await decide(main.caseId, mira, WORLD_START, [{ transactionId, verdict: "legitimate", typology: null }]);
  await undoDecision(world.ctx(mira, minutes(1)), { id: main.caseId });
  const siblingRow = async () =>
    (await world.db.select().from(cases).where(eq(cases.transactionId, transactionId)))[0];
  const opened = await siblingRow();
  expect(opened).toMatchObject({ kind: "sibling", state: "open" });
  const lapsesAt = opened?.lapsesAt as Date;
  await lapseUnreachedCases(job(new Date(lapsesAt.getTime() - 1)), signal);
  expect(await siblingRow()).toMatchObject({ state: "open" });
  await lapseUnreachedCases(job(lapsesAt), signal);
  expect(await siblingRow()).toMatchObject({ state: "lapsed", decidedAt: null });
});
