import { eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { outcomes } from "@/db/schema/outcomes";
import { labelLog } from "@/db/schema/scorers";
import { trail } from "@/db/schema/trail";
import { transactions } from "@/db/schema/transactions";
import type { KeyActor, PersonActor } from "@/lib/context";
import { correctDecision } from "@/lib/decisions/correct";
import { undoDecision } from "@/lib/decisions/undo";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { replayLog } from "@/lib/learning/replay";
import { newId } from "@/lib/new-id";
import { receiveOutcomes } from "@/lib/outcomes/receive";
import { testWorld, type WaitingCase, type World } from "../support/world";
import {
  AMOUNT,
  decide as decideOn,
  sender as key,
  LATER,
  labelOf as labelOn,
  moneyOf as moneyOn,
  sendOutcome,
  waitingCase,
} from "./payments";

let world: World;
let reviewer: PersonActor;
let supervisor: PersonActor;

beforeAll(async () => {
  world = await testWorld();
  reviewer = await world.person("reviewer");
  supervisor = await world.person("supervisor");
});

const one = (...args: Parameters<typeof sendOutcome> extends [World, ...infer Rest] ? Rest : never) =>
  sendOutcome(world, ...args);
const waiting = (options?: { held?: boolean }) => waitingCase(world, options);
const decide = (on: WaitingCase, verdict: "fraudulent" | "legitimate" | "customer_misuse") =>
  decideOn(world, reviewer, on, verdict);
const labelOf = (payment: { transactionId: string }) => labelOn(world, payment);
const moneyOf = (payment: { transactionId: string }) => moneyOn(world, payment);

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
    // Who made the payment and disputes it calls it fraud: that has been settled.
    await one(other, { reference: "second" });
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

  test("stands when the verdict that it confirmed is taken back, and the money that came back with it", async () => {
    const payment = await waiting();
    await one(payment, { kind: "recovery", amount: "29.00", currency: "EUR" });
    await decide(payment, "fraudulent");
    await one(payment);
    await undoDecision(world.ctx(reviewer), { id: payment.caseId });
    expect(await labelOf(payment)).toBe(1);
    expect(await moneyOf(payment)).toMatchObject({ attempted: AMOUNT, recovered: 29_00 });
    expect((await replayLog(world.db)).differingStates).toEqual([]);

    const other = await waiting();
    await one(other, { kind: "recovery", amount: "29.00", currency: "EUR" });
    await decide(other, "fraudulent");
    expect(await moneyOf(other)).toMatchObject({ attempted: AMOUNT, recovered: 29_00 });
    await undoDecision(world.ctx(reviewer), { id: other.caseId });
    expect(await labelOf(other)).toBeNull();
    expect(await moneyOf(other)).toMatchObject({ attempted: 0, recovered: 0 });
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
  const sender = (actor: KeyActor | PersonActor) =>
    receiveOutcomes(world.ctx(actor, LATER), { outcomes: [{}] });
  await expect(sender({ ...key, scopes: ["transactions:write"] })).rejects.toThrow("role");
  await expect(sender(reviewer)).rejects.toThrow("role");
  await expect(sender(supervisor)).resolves.toMatchObject({ results: [{ status: "rejected" }] });
  const [kept] = await world.db.select().from(outcomes).where(eq(outcomes.externalId, ""));
  expect(kept).toBeUndefined();
});
