import { eq } from "drizzle-orm";
import { beforeAll, expect, test } from "vitest";
import { ledger } from "@/db/schema/cases";
import { outcomes } from "@/db/schema/outcomes";
import { trail } from "@/db/schema/trail";
import { transactions } from "@/db/schema/transactions";
import type { KeyActor } from "@/lib/context";
import { newId } from "@/lib/new-id";
import { applyMissedOutcomes } from "@/lib/outcomes/apply-missed";
import { receiveOutcomes } from "@/lib/outcomes/receive";
import { receiveTransactions } from "@/lib/transactions/receive";
import { testWorld, WORLD_START, type World } from "../support/world";

let world: World;
beforeAll(async () => {
  world = await testWorld();
});

const key: KeyActor = {
  kind: "key",
  id: newId(),
  source: "shop",
  scopes: ["outcomes:write", "transactions:write"],
};
const at = WORLD_START.toISOString();

const report = (externalId: string, more = {}) => ({
  externalId,
  kind: "customer_report",
  occurredAt: at,
  ...more,
});
const send = (...items: object[]) => receiveOutcomes(world.ctx(key), { outcomes: items });

const arrive = (...externalIds: string[]) =>
  receiveTransactions(world.ctx(key), {
    source: key.source,
    items: externalIds.map((externalId) => ({
      externalId,
      occurredAt: at,
      amount: "80.00",
      currency: "EUR",
      channel: "card_remote",
      accountId: `ACC-${externalId}`,
      counterpartyId: "SHOP-1",
    })),
  });

async function paymentOf(externalId: string) {
  const [row] = await world.db.select().from(transactions).where(eq(transactions.externalId, externalId));
  return row as NonNullable<typeof row>;
}

test("an outcome that comes first is kept, and applied in the transaction in which its payment arrives", async () => {
  const { results } = await send(
    report("early"),
    report("early", { kind: "recovery", amount: "30.00", currency: "EUR" }),
  );
  expect(results).toMatchObject([
    { status: "created", transactionId: null, applied: false },
    { status: "created", transactionId: null, applied: false },
  ]);
  const before = await world.db.$count(trail, eq(trail.act, "outcomes.applied"));
  const [arrived] = await arrive("early", "other");
  const payment = await paymentOf("early");
  expect(arrived).toMatchObject({ status: "created", transactionId: payment.id });
  expect(payment.label).toBe(1);
  expect((await paymentOf("other")).label).toBeNull();
  const lines = await world.db.select().from(ledger).where(eq(ledger.transactionId, payment.id));
  expect(lines.reduce((sum, line) => sum + line.attemptedMinor, 0)).toBe(8_000);
  expect(lines.reduce((sum, line) => sum + line.recoveredMinor, 0)).toBe(3_000);
  const entries = await world.db.select().from(trail).where(eq(trail.act, "outcomes.applied"));
  const [entry, ...more] = entries.toSorted((a, b) => a.seq - b.seq).slice(before);
  expect(more).toEqual([]);
  expect(JSON.parse(entry?.facts ?? "")).toMatchObject({ labels: 1, refused: 0 });
  expect((await send(report("early"))).results).toMatchObject([
    { status: "duplicate", transactionId: payment.id, applied: true },
  ]);
});

test("one that cannot be applied stays, with the reason, and costs the payment nothing", async () => {
  await send(report("small", { kind: "recovery", amount: "80.01", currency: "EUR" }));
  const [arrived] = await arrive("small");
  expect(arrived?.status).toBe("created");
  const [kept] = await world.db.select().from(outcomes).where(eq(outcomes.externalId, "small"));
  expect(kept).toMatchObject({
    transactionId: (await paymentOf("small")).id,
    appliedAt: null,
    recoversBaseMinor: null,
    problem: "amount brings back more than was paid, with what has come back before",
  });
});

test("one that missed its payment by a moment is applied by the next look, once", async () => {
  await send(report("racing"));
  await arrive("of-the-same-moment");
  // As if both had been written at once, each before the other could be seen.
  await world.db
    .update(transactions)
    .set({ externalId: "racing" })
    .where(eq(transactions.externalId, "of-the-same-moment"));
  expect((await paymentOf("racing")).label).toBeNull();
  const job = { kind: "system" as const, job: "outcomes.apply-missed" };
  const look = () => applyMissedOutcomes(world.ctx(job), new AbortController().signal);
  await Promise.all([look(), look()]);
  const payment = await paymentOf("racing");
  expect(payment.label).toBe(1);
  const [stored] = await world.db.select().from(outcomes).where(eq(outcomes.externalId, "racing"));
  expect(stored).toMatchObject({ transactionId: payment.id, problem: null });
  expect(stored?.appliedAt).not.toBeNull();
  const lines = await world.db.select().from(ledger).where(eq(ledger.transactionId, payment.id));
  expect(lines.reduce((sum, line) => sum + line.attemptedMinor, 0)).toBe(8_000);
});
