import { createHash } from "node:crypto";
import { eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { vectorToBytes } from "@/db/columns";
import { cases } from "@/db/schema/cases";
import { outcomes } from "@/db/schema/outcomes";
import { arrivalDays, scores, transactions } from "@/db/schema/transactions";
import type { PersonActor } from "@/lib/context";
import { correctDecision } from "@/lib/decisions/correct";
import { decideCase } from "@/lib/decisions/decide";
import { showPassed } from "@/lib/learning/show-passed";
import { newId } from "@/lib/new-id";
import { DIMENSION } from "@/lib/signals/catalogue";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

let world: World;
let supervisor: PersonActor;
let reviewer: PersonActor;
let riskManager: PersonActor;
let draws: WaitingCase[];

const DAY_MS = 86_400_000;
const daysLater = (days: number) => new Date(WORLD_START.getTime() + days * DAY_MS);
const show = (input = {}, at = daysLater(1)) => showPassed(world.ctx(riskManager, at), input);

const decide = (waiting: WaitingCase, verdict: "fraudulent" | "legitimate" | "customer_misuse") =>
  decideCase(world.ctx(reviewer), {
    id: waiting.caseId,
    verdict,
    typology: verdict === "fraudulent" ? "other" : null,
    confidence: "sure",
    seenVersion: 1,
    scoreWasHidden: false,
    together: [],
  });

/** A payment that passed unseen, and what others said of it later. */
async function passedPayment(
  label: 1 | null,
  kind: "chargeback" | "customer_report",
  zone: "pass" | "review",
) {
  const id = newId();
  await world.db.insert(transactions).values({
    id,
    source: "test",
    externalId: id,
    contentHash: createHash("sha256").update(id).digest(),
    receivedAt: WORLD_START,
    occurredAt: WORLD_START,
    amountMinor: 5_000,
    currency: "EUR",
    amountBaseMinor: 5_000,
    direction: "outgoing",
    channel: "card_remote",
    accountId: "ACC-P",
    counterpartyId: "SHOP-P",
    action: "pass",
    paymentState: "settled",
    label,
  });
  await world.db.insert(scores).values({
    transactionId: id,
    kind: "arrival",
    takenAt: WORLD_START,
    vector: vectorToBytes(new Float64Array(DIMENSION)),
    missing: Buffer.alloc(8),
    signalSetVersion: 1,
    scorerVersion: 1,
    policyVersion: 1,
    logit: -3,
    leverage: 1,
    zone,
  });
  for (const stage of ["opened", "lost"] as const) {
    await world.db.insert(outcomes).values({
      id: newId(),
      source: "test",
      externalId: id,
      transactionId: id,
      kind,
      reasonFamily: "fraud",
      stage,
      occurredAt: daysLater(1),
      receivedAt: daysLater(1),
      contentHash: createHash("sha256").update(`${id} ${stage}`).digest(),
    });
  }
}

beforeAll(async () => {
  world = await testWorld();
  supervisor = await world.person("supervisor");
  reviewer = await world.person("reviewer");
  riskManager = await world.person("risk_manager");
});

describe("the estimate of passed fraud", () => {
  test("is not defined where nothing passed, and says so", async () => {
    expect(await show()).toEqual({
      from: "2026-02-04",
      to: "2026-03-03",
      passed: 0,
      drawn: 0,
      decided: 0,
      waiting: 0,
      lapsed: 0,
      foundFraudulent: 0,
      estimate: null,
      reason: "nothing_passed",
      reported: { fraudulent: 0, valueMinor: 0 },
      baseCurrency: { code: "EUR", minorDigits: 2 },
    });
  });

  test("nor where nothing was drawn or decided", async () => {
    await world.db.insert(arrivalDays).values({ day: "2026-03-02", received: 1_200, passed: 1_000 });
    expect(await show()).toMatchObject({ passed: 1_000, estimate: null, reason: "nothing_drawn" });
    draws = await world.waitingCases(10, { seed: 5, amountMinor: 20_000 });
    for (const { caseId } of draws) {
      await world.db
        .update(cases)
        .set({ kind: "sample", zone: "pass", sampleProbability: 0.01 })
        .where(eq(cases.id, caseId));
    }
    expect(await show()).toMatchObject({ drawn: 10, waiting: 10, estimate: null, reason: "nothing_decided" });
  });

  test("rests on the verdicts in force of the draws alone, customers' misuse being none", async () => {
    await world
      .waitingCases(5, { seed: 6 })
      .then((alerts) => Promise.all(alerts.map((one) => decide(one, "fraudulent"))));
    const [first, second, third, fourth, fifth] = draws as [
      WaitingCase,
      WaitingCase,
      WaitingCase,
      WaitingCase,
      WaitingCase,
    ];
    await decide(first, "fraudulent");
    await decide(second, "fraudulent");
    await decide(third, "legitimate");
    await decide(fourth, "customer_misuse");
    await correctDecision(world.ctx(supervisor), {
      id: second.caseId,
      verdict: "legitimate",
      typology: null,
      reason: "The customer confirmed it",
    });
    await world.db.update(cases).set({ state: "lapsed" }).where(eq(cases.id, fifth.caseId));
    const view = await show();
    expect(view).toMatchObject({
      passed: 1_000,
      drawn: 10,
      decided: 4,
      waiting: 5,
      lapsed: 1,
      foundFraudulent: 1,
      reason: null,
    });
    // One in four decided draws, and ten draws at 1 in 100 stand for 1,000.
    expect(view.estimate?.standsFor).toBeCloseTo(1_000, 9);
    expect(view.estimate?.fraudulent.value).toBeCloseTo(250, 9);
    expect(view.estimate?.perThousand.value).toBeCloseTo(250, 9);
    expect(view.estimate?.valueMinor.value).toBe(5_000_000);
    expect(view.estimate?.fraudulent.low).toBeLessThan(250);
    expect(view.estimate?.fraudulent.high).toBeGreaterThan(250);
  });

  test("shows what others reported on passed payments beside it, each once", async () => {
    const before = await show();
    await passedPayment(1, "chargeback", "pass");
    await passedPayment(1, "customer_report", "pass");
    await passedPayment(null, "chargeback", "pass");
    await passedPayment(1, "chargeback", "review");
    const after = await show();
    expect(after.reported).toEqual({ fraudulent: 2, valueMinor: 10_000 });
    expect({ ...after, reported: before.reported }).toEqual(before);
  });

  test("is over the days asked for", async () => {
    expect(await show({ from: "2026-03-03" })).toMatchObject({
      from: "2026-03-03",
      to: "2026-03-03",
      passed: 0,
      drawn: 0,
    });
    expect(await show({ to: "2026-03-02" })).toMatchObject({
      from: "2026-02-03",
      to: "2026-03-02",
      drawn: 10,
    });
    expect(await show({ from: "2026-03-01", to: "2026-03-02" }, daysLater(60))).toMatchObject({ drawn: 10 });
    await expect(show({ from: "2024-01-01", to: "2026-01-01" })).rejects.toMatchObject({ code: "invalid" });
  });

  test("is for those who may read about the scorer", async () => {
    await expect(showPassed(world.ctx(reviewer))).rejects.toMatchObject({ code: "forbidden" });
  });
});
