import { and, desc, eq } from "drizzle-orm";
import { expect, test } from "vitest";
import { createDatabase } from "@/db/client";
import { bytesToVector } from "@/db/columns";
import { cases } from "@/db/schema/cases";
import { scores, signalSets, transactions } from "@/db/schema/transactions";
import { RankingModel } from "@/lib/cases/ranking/model";
import { rescoreWaitingCases } from "@/lib/cases/rescore-waiting";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { newId } from "@/lib/new-id";
import { CATALOGUE, DIMENSION } from "@/lib/signals/catalogue";
import { isMissing } from "@/lib/signals/vectors";
import { receiveTransactions } from "@/lib/transactions/receive";
import { testWorld, type WaitingCase } from "../support/world";
import { Office } from "./own-signal";

const never = new AbortController().signal;

test("after a switch every waiting case is scored anew, the decided ones are left, and the ranking follows", async () => {
  const office = await Office.open(await testWorld());
  const { world } = office;
  const waiting = await office.cases(20, 21);
  await office.decideAll(waiting.slice(0, 10));
  const model = new RankingModel(world.db);
  await model.catchUp([], true);
  await office.switch((await office.draft()).signalId, "on");
  await model.catchUp([], true);
  expect(model.version).toBe((await readScorerInUse(world.db)).version);
  const logitOf = (one: WaitingCase) =>
    model.read(office.as(office.supervisor).now(), (view) => view.logitOf(one.caseId));
  const padded = await logitOf(waiting[10] as WaitingCase);
  expect(padded).toBeTypeOf("number");

  await rescoreWaitingCases(office.as(office.supervisor), never);
  const newest = await Promise.all(
    waiting.map(async ({ caseId }) => {
      const [row] = await world.db
        .select({ score: scores })
        .from(cases)
        .innerJoin(scores, eq(scores.id, cases.scoreId))
        .where(eq(cases.id, caseId));
      return row?.score as typeof scores.$inferSelect;
    }),
  );
  expect(newest.map(({ signalSetVersion }) => signalSetVersion)).toEqual(
    waiting.map((_, index) => (index < 10 ? 1 : 2)),
  );
  const { scorer } = await readScorerInUse(world.db);
  let marked = 0;
  for (const { vector, logit, missing } of newest.slice(10)) {
    const stored = bytesToVector(vector);
    expect(stored.length).toBe(DIMENSION + 1);
    expect(scorer.score(stored).logit).toBeCloseTo(logit, 12);
    if (isMissing(new Uint8Array(missing), CATALOGUE.length)) {
      marked += 1;
      expect(stored[DIMENSION]).toBe(0);
    }
  }
  expect(
    newest.slice(10).filter(({ vector }) => bytesToVector(vector)[DIMENSION] !== 0).length,
  ).toBeGreaterThan(5);
  // The fourteenth lacks the attribute.
  expect(marked).toBe(1);
  await model.catchUp(waiting.map(({ caseId }) => caseId));
  const now = await logitOf(waiting[10] as WaitingCase);
  expect(now).not.toBe(padded);
  expect(now).toBeCloseTo(
    scorer.score(bytesToVector((newest[10] as typeof scores.$inferSelect).vector)).logit,
    9,
  );

  // Nothing is left to do, and after the stragglers' minute it is not looked for again.
  const before = await world.db.select({ id: scores.id }).from(scores);
  const soon = new Date(office.as(office.supervisor).now().getTime() + 120_000);
  await rescoreWaitingCases(world.ctx(office.supervisor, soon), never);
  expect(await world.db.select({ id: scores.id }).from(scores)).toHaveLength(before.length);
  const [set] = await world.db.select().from(signalSets).where(eq(signalSets.version, 2));
  expect(set?.rescoredAt).toEqual(soon);
});

test("both of two servers score new payments by the set that the scorer in use names", async () => {
  const office = await Office.open(await testWorld());
  const { world } = office;
  const { db: other, close } = createDatabase(world.url);
  const send = async (db: typeof world.db, externalId: string) => {
    const sender = { kind: "key", id: newId(), source: "test", scopes: ["transactions:write"] } as const;
    const ctx = { ...office.as(office.supervisor), db, actor: sender };
    const [result] = await receiveTransactions(ctx, {
      source: "test",
      items: [
        {
          externalId,
          occurredAt: ctx.now().toISOString(),
          amount: "120.00",
          currency: "EUR",
          channel: "card_remote",
          accountId: "A-1",
          counterpartyId: "C-1",
          attributes: { loyalty_years: 8 },
        },
      ],
    });
    expect(result).toMatchObject({ status: "created" });
    const [row] = await world.db
      .select({ score: scores })
      .from(scores)
      .innerJoin(transactions, eq(transactions.id, scores.transactionId))
      .where(and(eq(transactions.externalId, externalId), eq(scores.kind, "arrival")))
      .orderBy(desc(scores.id));
    const { vector, signalSetVersion } = (row as NonNullable<typeof row>).score;
    return { own: bytesToVector(vector).subarray(DIMENSION), signalSetVersion };
  };
  try {
    expect(await send(world.db, "P-1")).toMatchObject({ signalSetVersion: 1 });
    expect(await send(other, "P-2")).toMatchObject({ signalSetVersion: 1 });
    const { signalId } = await office.draft();
    await office.switch(signalId, "on");
    for (const [db, id] of [
      [world.db, "P-3"],
      [other, "P-4"],
    ] as const) {
      const { own, signalSetVersion } = await send(db, id);
      expect([...own]).toEqual([1]);
      expect(signalSetVersion).toBe(2);
    }
    await office.switch(signalId, "off");
    for (const [db, id] of [
      [world.db, "P-5"],
      [other, "P-6"],
    ] as const) {
      const { own, signalSetVersion } = await send(db, id);
      expect([...own]).toEqual([0]);
      expect(signalSetVersion).toBe(3);
    }
  } finally {
    await close();
  }
});
