import { eq, sql } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { cases, ledger } from "@/db/schema/cases";
import { outcomes } from "@/db/schema/outcomes";
import { labelLog } from "@/db/schema/scorers";
import { trail } from "@/db/schema/trail";
import { transactions } from "@/db/schema/transactions";
import type { KeyActor, PersonActor } from "@/lib/context";
import { correctDecision } from "@/lib/decisions/correct";
import { decideCase } from "@/lib/decisions/decide";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { newId } from "@/lib/new-id";
import { receiveOutcomes } from "@/lib/outcomes/receive";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

let world: World;
let reviewer: PersonActor;
let supervisor: PersonActor;

beforeAll(async () => {
  world = await testWorld();
  reviewer = await world.person("reviewer");
  supervisor = await world.person("supervisor");
});

const key: KeyActor = { kind: "key", id: newId(), source: "test", scopes: ["outcomes:write"] };
const LATER = new Date(WORLD_START.getTime() + 7 * 86_400_000);
const AMOUNT = 12_900;

async function one(payment: WaitingCase | string, more: Record<string, unknown> = {}, actor = key) {
  const externalId = typeof payment === "string" ? payment : payment.transactionId;
  const item = {
    externalId,
    kind: "chargeback",
    reasonFamily: "fraud",
    stage: "opened",
    occurredAt: LATER.toISOString(),
    ...more,
  };
  const { results } = await receiveOutcomes(world.ctx(actor, LATER), { outcomes: [item] });
  const [result] = results;
  if (!result) throw new Error("no result");
  return result;
}

async function waiting(options: { held?: boolean } = {}): Promise<WaitingCase> {
  const [made] = await world.waitingCases(1, { seed: seeds++, amountMinor: AMOUNT, ...options });
  return made as WaitingCase;
}
let seeds = 100;

function decide(on: WaitingCase, verdict: "fraudulent" | "legitimate" | "customer_misuse") {
  return decideCase(world.ctx(reviewer), {
    id: on.caseId,
    verdict,
    typology: verdict === "fraudulent" ? "details_theft" : null,
    confidence: "sure",
    seenVersion: 1,
    scoreWasHidden: false,
    together: [],
  });
}

async function labelOf({ transactionId }: { transactionId: string }) {
  const [row] = await world.db.select().from(transactions).where(eq(transactions.id, transactionId));
  return row?.label ?? null;
}

async function moneyOf({ transactionId }: { transactionId: string }) {
  const figure = (column: string) => sql`coalesce(sum(${sql.raw(column)}), 0)`.mapWith(Number);
  const [row] = await world.db
    .select({
      attempted: figure("attempted_minor"),
      prevented: figure("prevented_minor"),
      missed: figure("missed_minor"),
      recovered: figure("recovered_minor"),
      falsePositive: figure("false_positive_minor"),
    })
    .from(ledger)
    .where(eq(ledger.transactionId, transactionId));
  return row;
}

describe("a fraud outcome", () => {
  test("labels an unreviewed payment, teaches the scorer, books the loss and leaves a trail", async () => {
    const payment = await waiting();
    const before = await readScorerInUse(world.db);
    const result = await one(payment);
    expect(result).toMatchObject({
      status: "created",
      externalId: payment.transactionId,
      transactionId: payment.transactionId,
      applied: true,
      errors: [],
    });
    expect(await labelOf(payment)).toBe(1);
    const after = await readScorerInUse(world.db);
    expect(after.version).toBe(before.version + 1);
    expect(after.scorer.score(payment.vector).probability).toBeGreaterThan(
      before.scorer.score(payment.vector).probability,
    );
    const [logged] = await world.db
      .select()
      .from(labelLog)
      .where(eq(labelLog.transactionId, payment.transactionId));
    expect(logged).toMatchObject({ kind: "outcome", label: 1, outcomeId: result.outcomeId, personId: null });
    expect(await moneyOf(payment)).toMatchObject({ attempted: AMOUNT, prevented: 0, missed: 0 });
    const entries = await world.db.select().from(trail).where(eq(trail.act, "outcomes.received"));
    const facts = JSON.parse(entries.at(-1)?.facts ?? "{}");
    expect(facts).toEqual({ created: 1, duplicates: 0, rejected: 0, kept: 0, labels: 1 });
  });

  test("overturns a verdict of legitimate, and the loss counts as missed", async () => {
    const payment = await waiting();
    await decide(payment, "legitimate");
    await one(payment);
    expect(await labelOf(payment)).toBe(1);
    expect(await moneyOf(payment)).toMatchObject({ attempted: AMOUNT, missed: AMOUNT, falsePositive: 0 });
  });

  test("gives way to a correction, before it and after it", async () => {
    const payment = await waiting();
    await decide(payment, "fraudulent");
    const correct = (verdict: "fraudulent" | "legitimate") =>
      correctDecision(world.ctx(supervisor, LATER), {
        id: payment.caseId,
        verdict,
        typology: verdict === "fraudulent" ? "other" : null,
        reason: "The customer confirmed it",
      });
    await correct("legitimate");
    expect(await one(payment)).toMatchObject({ status: "created", applied: true });
    expect(await labelOf(payment)).toBe(-1);
    expect(await moneyOf(payment)).toMatchObject({ attempted: 0, missed: 0 });

    const other = await waiting();
    await decide(other, "legitimate");
    await one(other);
    await correctDecision(world.ctx(supervisor, LATER), {
      id: other.caseId,
      verdict: "customer_misuse",
      typology: null,
      reason: "The customer made it",
    });
    expect(await labelOf(other)).toBeNull();
    expect(await moneyOf(other)).toMatchObject({ attempted: 0, missed: 0 });
  });

  test("confirms a verdict without counting it twice", async () => {
    const payment = await waiting({ held: true });
    await decide(payment, "fraudulent");
    const { version } = await readScorerInUse(world.db);
    await one(payment);
    expect((await readScorerInUse(world.db)).version).toBe(version);
    expect(await moneyOf(payment)).toMatchObject({ attempted: AMOUNT, prevented: AMOUNT });
  });

  test("stands when the case is decided afterwards, whatever the verdict", async () => {
    for (const verdict of ["legitimate", "fraudulent"] as const) {
      const payment = await waiting();
      await one(payment);
      await decide(payment, verdict);
      expect(await labelOf(payment)).toBe(1);
      expect(await moneyOf(payment)).toMatchObject({ attempted: AMOUNT });
    }
  });

  test("has a fraud reason: no other family labels a payment", async () => {
    for (const reasonFamily of ["service", "processing", "other"] as const) {
      const payment = await waiting();
      await one(payment, { reasonFamily });
      await one(payment, { kind: "customer_report", reasonFamily });
      expect(await labelOf(payment)).toBeNull();
      expect(await moneyOf(payment)).toMatchObject({ attempted: 0 });
    }
    const disputed = await waiting();
    await one(disputed, { reasonFamily: undefined });
    expect(await labelOf(disputed)).toBeNull();
    await one(disputed, { kind: "customer_report", reasonFamily: undefined });
    expect(await labelOf(disputed)).toBe(1);
  });
});

describe("money that comes back", () => {
  test("a dispute won moves money and not the label", async () => {
    const payment = await waiting();
    await one(payment);
    await one(payment, { stage: "won" });
    expect(await labelOf(payment)).toBe(1);
    expect(await moneyOf(payment)).toMatchObject({ attempted: AMOUNT, recovered: AMOUNT });
    const never = await waiting();
    await one(never, { stage: "won" });
    expect(await labelOf(never)).toBeNull();
    expect(await moneyOf(never)).toMatchObject({ attempted: 0, recovered: 0 });
  });

  test("a recovery counts once there is a loss, in parts and never beyond it", async () => {
    const payment = await waiting();
    const recovery = (amount: string, reference: string) =>
      one(payment, {
        kind: "recovery",
        reasonFamily: undefined,
        stage: undefined,
        amount,
        currency: "EUR",
        reference,
      });
    await recovery("50.00", "first");
    expect(await moneyOf(payment)).toMatchObject({ attempted: 0, recovered: 0 });
    await one(payment);
    expect(await moneyOf(payment)).toMatchObject({ attempted: AMOUNT, recovered: 5_000 });
    await recovery("50.00", "second");
    expect(await moneyOf(payment)).toMatchObject({ recovered: 10_000 });
    expect(await recovery("29.01", "third")).toMatchObject({
      status: "rejected",
      errors: [{ path: "amount" }],
    });
    await recovery("29.00", "fourth");
    expect(await moneyOf(payment)).toMatchObject({ attempted: AMOUNT, recovered: AMOUNT });
  });

  test("in a currency without a rate is refused, since nothing could be booked", async () => {
    const payment = await waiting();
    const result = await one(payment, { kind: "recovery", amount: "5.000", currency: "KWD" });
    expect(result).toMatchObject({ status: "rejected", errors: [{ path: "currency" }] });
  });
});

describe("cleared", () => {
  const cleared = { kind: "cleared", reasonFamily: undefined, stage: undefined };

  test("labels a payment legitimate that nobody looks at", async () => {
    const payment = await waiting();
    await world.db.update(cases).set({ state: "lapsed" }).where(eq(cases.id, payment.caseId));
    await one(payment, cleared);
    expect(await labelOf(payment)).toBe(-1);
  });

  test("waits for the person who is to decide, and yields to every other finding", async () => {
    const open = await waiting();
    await one(open, cleared);
    expect(await labelOf(open)).toBeNull();
    const fraud = await waiting();
    await decide(fraud, "fraudulent");
    await one(fraud, cleared);
    expect(await labelOf(fraud)).toBe(1);
    const misuse = await waiting();
    await decide(misuse, "customer_misuse");
    await one(misuse, cleared);
    expect(await labelOf(misuse)).toBeNull();
    const disputed = await waiting();
    await one(disputed);
    await one(disputed, cleared);
    expect(await labelOf(disputed)).toBe(1);
  });

  test("gives way to a fraud outcome that follows, also within one request", async () => {
    const payment = await waiting();
    await world.db.update(cases).set({ state: "lapsed" }).where(eq(cases.id, payment.caseId));
    const base = { externalId: payment.transactionId, occurredAt: LATER.toISOString() };
    const fraud = { ...base, kind: "customer_report" };
    await receiveOutcomes(world.ctx(key, LATER), {
      outcomes: [{ ...base, kind: "cleared" }, fraud, { ...base, kind: "cleared", reference: "again" }],
    });
    expect(await labelOf(payment)).toBe(1);
    expect(await moneyOf(payment)).toMatchObject({ attempted: AMOUNT });
  });
});

describe("the same outcome again", () => {
  test("is a duplicate and changes nothing, in one request, in two, and in many at once", async () => {
    const payment = await waiting();
    const item = {
      externalId: payment.transactionId,
      kind: "recovery",
      occurredAt: LATER.toISOString(),
      amount: "10.00",
      currency: "EUR",
    };
    const send = () => receiveOutcomes(world.ctx(key, LATER), { outcomes: [item, item] });
    const answers = await Promise.all(Array.from({ length: 8 }, send));
    const results = answers.flatMap((answer) => answer.results);
    expect(results.filter((result) => result.status === "created")).toHaveLength(1);
    expect(results.filter((result) => result.status === "duplicate")).toHaveLength(15);
    expect(new Set(results.map((result) => result.outcomeId)).size).toBe(1);
    await one(payment);
    expect(await moneyOf(payment)).toMatchObject({ recovered: 1_000 });
  });
});

describe("bad items", () => {
  test("are refused by name and cost no other", async () => {
    const payment = await waiting();
    const good = {
      externalId: payment.transactionId,
      kind: "customer_report",
      occurredAt: LATER.toISOString(),
    };
    const { results } = await receiveOutcomes(world.ctx(key, LATER), {
      outcomes: [
        { ...good, surprise: 1 },
        { ...good, kind: "rumour" },
        { ...good, occurredAt: "yesterday" },
        { ...good, occurredAt: "2036-01-01T00:00:00Z" },
        { ...good, kind: "recovery" },
        { ...good, amount: "1.00" },
        { ...good, amount: "1.001", currency: "EUR" },
        { ...good, amount: "1", currency: "XXX" },
        { ...good, reference: "4111 1111 1111 1111" },
        7,
        good,
      ],
    });
    expect(results.map((result) => result.errors.map((error) => error.path).join())).toEqual([
      "surprise",
      "kind",
      "occurredAt",
      "occurredAt",
      "amount",
      "currency",
      "amount",
      "currency",
      "reference",
      "",
      "",
    ]);
    expect(results.map((result) => result.status).slice(0, 10)).toEqual(Array(10).fill("rejected"));
    expect(results[10]?.status).toBe("created");
    expect(JSON.stringify(results)).not.toContain("4111");
  });

  test("an identifier that two other sources use names no payment; the sender's own comes first", async () => {
    const [first, second] = [await waiting(), await waiting()];
    const shared = newId();
    for (const [payment, source] of [
      [first, "alpha"],
      [second, "beta"],
    ] as const) {
      await world.db
        .update(transactions)
        .set({ externalId: shared, source })
        .where(eq(transactions.id, payment.transactionId));
    }
    expect(await one(shared)).toMatchObject({ status: "rejected", errors: [{ path: "externalId" }] });
    const result = await one(shared, {}, { ...key, source: "beta" });
    expect(result).toMatchObject({ status: "created", transactionId: second.transactionId });
    expect(await labelOf(first)).toBeNull();
  });
});

test("only who may send outcomes can", async () => {
  const sender = (actor: KeyActor | PersonActor) => receiveOutcomes(world.ctx(actor), { outcomes: [{}] });
  await expect(sender({ ...key, scopes: ["transactions:write"] })).rejects.toThrow("role");
  await expect(sender(reviewer)).rejects.toThrow("role");
  await expect(sender(supervisor)).resolves.toMatchObject({ results: [{ status: "rejected" }] });
  const [kept] = await world.db.select().from(outcomes).where(eq(outcomes.externalId, ""));
  expect(kept).toBeUndefined();
});
