import { eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { cases } from "@/db/schema/cases";
import type { PersonActor } from "@/lib/context";
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

beforeAll(async () => {
  world = await testWorld();
  reviewer = await world.person("reviewer");
});

const one = (...args: Parameters<typeof sendOutcome> extends [World, ...infer Rest] ? Rest : never) =>
  sendOutcome(world, ...args);
const waiting = (options?: { held?: boolean }) => waitingCase(world, options);
const decide = (on: WaitingCase, verdict: "fraudulent" | "legitimate" | "customer_misuse") =>
  decideOn(world, reviewer, on, verdict);
const labelOf = (payment: { transactionId: string }) => labelOn(world, payment);
const moneyOf = (payment: { transactionId: string }) => moneyOn(world, payment);

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
