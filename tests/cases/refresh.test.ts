import { and, eq, inArray } from "drizzle-orm";
import { beforeAll, describe, expect, test, vi } from "vitest";
import { createDatabase } from "@/db/client";
import { bytesToVector, vectorToBytes } from "@/db/columns";
import { cases } from "@/db/schema/cases";
import { signalRefreshes } from "@/db/schema/scorers";
import { scores, transactions } from "@/db/schema/transactions";
import { rankingOf, stopRanking } from "@/lib/cases/ranking/ranking";
import { refreshLinkedCases } from "@/lib/cases/refresh";
import type { Context, PersonActor } from "@/lib/context";
import { decideCase } from "@/lib/decisions/decide";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { log } from "@/lib/log";
import { recomputeVectors } from "@/lib/signals/recompute";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

let world: World;
let mira: PersonActor;
let seed = 1;

beforeAll(async () => {
  world = await testWorld();
  mira = await world.person("reviewer");
  return () => stopRanking(world.db);
});

const minutes = (count: number) => new Date(WORLD_START.getTime() + count * 60_000);
const days = (count: number) => minutes(count * 24 * 60);
const { signal } = new AbortController();
const job = (at: Date): Context => world.ctx({ kind: "system", job: "test" }, at);
const waiting = (count: number) => world.waitingCases(count, { seed: seed++ });
const rowOf = async (id: string) => (await world.db.select().from(cases).where(eq(cases.id, id)))[0];
const paymentOf = async ({ transactionId }: WaitingCase) =>
  (await world.db.select().from(transactions).where(eq(transactions.id, transactionId)))[0];

const decide = (id: string, at = WORLD_START) =>
  decideCase(world.ctx(mira, at), {
    id,
    verdict: "fraudulent",
    typology: "other",
    confidence: "sure",
    seenVersion: 1,
    scoreWasHidden: false,
    together: [],
  });

describe("when a payment is labelled", () => {
  const scoresOf = ({ transactionId }: WaitingCase) =>
    world.db.select().from(scores).where(eq(scores.transactionId, transactionId)).orderBy(scores.id);

  /** Cases whose stored signals are those their payments have. */
  async function scoredTruly(
    count: number,
    fields: (index: number) => Partial<typeof transactions.$inferInsert>,
  ) {
    const made = await waiting(count);
    for (const [index, { transactionId }] of made.entries()) {
      await world.db
        .update(transactions)
        .set({ counterpartyId: `SHOP-${transactionId}`, ...fields(index) })
        .where(eq(transactions.id, transactionId));
    }
    const vectors = await recomputeVectors(
      world.db,
      made.map(({ transactionId }) => transactionId),
      (await readScorerInUse(world.db)).signals,
    );
    for (const one of made) {
      const { vector, missing } = vectors.get(one.transactionId) as {
        vector: Float64Array;
        missing: Uint8Array;
      };
      const [arrival] = await scoresOf(one);
      const { id: _, ...like } = arrival as typeof scores.$inferSelect;
      const [inserted] = await world.db
        .insert(scores)
        .values({ ...like, vector: vectorToBytes(vector), missing: Buffer.from(missing) })
        .$returningId();
      await world.db
        .update(cases)
        .set({ scoreId: inserted?.id as number })
        .where(eq(cases.id, one.caseId));
    }
    return made;
  }

  test("waiting cases of its account, card, device or counterparty are scored anew, and nothing else is", async () => {
    const device = { deviceId: "device-shared" };
    const [labelled, byDevice, byAccount, stranger, decidedBefore] = (await scoredTruly(5, (index) =>
      index === 2 ? {} : index === 3 ? { deviceId: "device-other" } : device,
    )) as [WaitingCase, WaitingCase, WaitingCase, WaitingCase, WaitingCase];
    await world.db
      .update(transactions)
      .set({ accountId: (await paymentOf(labelled))?.accountId as string })
      .where(eq(transactions.id, byAccount.transactionId));
    await decide(decidedBefore.caseId);
    await refreshLinkedCases(job(minutes(1)), signal);
    const before = await Promise.all([labelled, byDevice, byAccount, stranger, decidedBefore].map(scoresOf));
    await decide(labelled.caseId, minutes(2));
    expect(await world.db.select().from(signalRefreshes)).toHaveLength(1);
    await refreshLinkedCases(job(minutes(3)), signal);
    expect(await world.db.select().from(signalRefreshes)).toEqual([]);
    const after = await Promise.all([labelled, byDevice, byAccount, stranger, decidedBefore].map(scoresOf));
    const more = after.map((list, index) => list.length - (before[index]?.length ?? 0));
    expect(more).toEqual([0, 1, 1, 0, 0]);
    const fresh = after[1]?.at(-1) as typeof scores.$inferSelect;
    expect(fresh).toMatchObject({ kind: "refresh", scorerVersion: expect.any(Number) });
    const { signals } = await readScorerInUse(world.db);
    const [wanted] = (await recomputeVectors(world.db, [byDevice.transactionId], signals)).values();
    expect(bytesToVector(fresh.vector)).toEqual(wanted?.vector);
    const row = await rowOf(byDevice.caseId);
    expect(row).toMatchObject({ scoreId: fresh.id, revision: 1 });
    // The ranking has its new signals too.
    const ranked = () => rankingOf(world.db).read(minutes(4), (view) => view.logitOf(byDevice.caseId));
    await expect.poll(async () => Math.abs(((await ranked()) as number) - fresh.logit)).toBeLessThan(1e-9);
  });

  test("of too many linked cases the closest are scored anew, then the newest, and the log says so", async () => {
    const made = await waiting(504);
    const [labelled, byDevice, oldest, old] = made as [WaitingCase, WaitingCase, WaitingCase, WaitingCase];
    const change = (one: WaitingCase, values: Partial<typeof transactions.$inferInsert>) =>
      world.db.update(transactions).set(values).where(eq(transactions.id, one.transactionId));
    await change(labelled, { deviceId: "device-of-many" });
    await change(byDevice, { deviceId: "device-of-many", occurredAt: days(-30) });
    await change(oldest, { occurredAt: days(-20) });
    await change(old, { occurredAt: days(-10) });
    await decide(labelled.caseId);
    const warn = vi.spyOn(log, "warn");
    await refreshLinkedCases(job(minutes(1)), signal);
    expect(warn).toHaveBeenCalledWith(
      { labelledPayments: 1, mostRefreshed: 500 },
      expect.stringContaining("linked"),
    );
    warn.mockRestore();
    const refreshed = await world.db
      .select({ transactionId: scores.transactionId })
      .from(scores)
      .innerJoin(cases, eq(cases.scoreId, scores.id))
      .where(
        and(
          eq(scores.kind, "refresh"),
          inArray(
            cases.id,
            made.map(({ caseId }) => caseId),
          ),
        ),
      );
    const ids = new Set(refreshed.map(({ transactionId }) => transactionId));
    expect(ids.size).toBe(500);
    expect(ids).toContain(byDevice.transactionId);
    for (const left of [labelled, oldest, old]) expect(ids).not.toContain(left.transactionId);
  });

  test("the closest ties of a label that comes meanwhile do not wait for the many of a counterparty", async () => {
    const made = await waiting(90);
    const [first, second, tied] = made as [WaitingCase, WaitingCase, WaitingCase];
    for (const { transactionId } of [second, tied]) {
      await world.db
        .update(transactions)
        .set({ deviceId: "device-of-two", occurredAt: days(-40) })
        .where(eq(transactions.id, transactionId));
    }
    const refreshes = async () => {
      const ids = made.map(({ transactionId }) => transactionId);
      return world.db
        .select({ id: scores.id, transactionId: scores.transactionId })
        .from(scores)
        .where(and(eq(scores.kind, "refresh"), inArray(scores.transactionId, ids)))
        .orderBy(scores.id);
    };
    await decide(first.caseId);
    const running = refreshLinkedCases(job(minutes(1)), signal);
    await expect.poll(async () => (await refreshes()).length).toBeGreaterThan(0);
    await decide(second.caseId);
    await running;
    const order = (await refreshes()).map(({ transactionId }) => transactionId);
    expect(order).toContain(tied.transactionId);
    expect(order.indexOf(tied.transactionId)).toBeLessThan(60);
  });

  test("two servers that refresh at once give each linked case one new score", async () => {
    const made = await scoredTruly(6, () => ({ deviceId: "device-crowd" }));
    await refreshLinkedCases(job(minutes(1)), signal);
    await decide((made[0] as WaitingCase).caseId);
    const other = createDatabase(world.url, 6);
    try {
      await Promise.all([
        refreshLinkedCases(job(minutes(3)), signal),
        refreshLinkedCases({ ...job(minutes(3)), db: other.db }, signal),
      ]);
    } finally {
      await other.close();
    }
    expect(await world.db.select().from(signalRefreshes)).toEqual([]);
    for (const one of made.slice(1)) {
      expect((await scoresOf(one)).filter(({ kind }) => kind === "refresh")).toHaveLength(1);
    }
  });
});
