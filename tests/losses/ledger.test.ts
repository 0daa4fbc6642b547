import { createHash } from "node:crypto";
import { eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { decisions, ledger } from "@/db/schema/cases";
import { outcomes } from "@/db/schema/outcomes";
import { bookOutcome, reverseBooking } from "@/lib/losses/book";
import { weekFigures } from "@/lib/losses/read";
import { settleRecoveries } from "@/lib/losses/recoveries";
import { weekView } from "@/lib/losses/view";
import { newId } from "@/lib/new-id";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { testWorld, type World } from "../support/world";
import { decide, decidedPayment, insertCase, insertPayment } from "./decided-payments";

// 2026-W12 is Monday 16 to Sunday 22 March.
const WEDNESDAY = new Date("2026-03-18T10:00:00Z");
const FRIDAY = new Date("2026-03-20T10:00:00Z");
const NEXT_MONDAY = new Date("2026-03-23T08:00:00Z");

const FIGURES = [
  "attemptedMinor",
  "preventedMinor",
  "missedMinor",
  "recoveredMinor",
  "falsePositiveMinor",
  "lostMarginMinor",
  "reviewCostMinor",
] as const;

let world: World;
beforeAll(async () => {
  world = await testWorld();
});

const week = (label: string, by: "transaction" | "booking" = "transaction", now = NEXT_MONDAY, on = world) =>
  weekFigures(on.db, { week: label, by, timeZone: "UTC", now });

async function linesOf(transactionId: string) {
  return world.db.select().from(ledger).where(eq(ledger.transactionId, transactionId)).orderBy(ledger.id);
}

async function balanceOf(transactionId: string) {
  const lines = await linesOf(transactionId);
  return Object.fromEntries(
    FIGURES.map((figure) => [figure, lines.reduce((sum, line) => sum + line[figure], 0)]),
  );
}

async function recover(transactionId: string, recoversBaseMinor: number, at: Date) {
  await world.db.insert(outcomes).values({
    id: newId(),
    source: "test",
    externalId: transactionId,
    transactionId,
    kind: "recovery",
    occurredAt: at,
    receivedAt: at,
    recoversBaseMinor,
    contentHash: createHash("sha256").update(newId()).digest(),
    appliedAt: at,
  });
}

test("a worked week comes out to the cent in the read, in the view and in basis points", async () => {
  // Own construction, exact arithmetic; no outside authority is claimed for the figures.
  const own = await testWorld();
  const held = { paymentState: "held" as const, action: "hold" as const, occurredAt: WEDNESDAY };
  const gone = { occurredAt: WEDNESDAY };
  // 6.5 minutes each.
  const fraudulent = { verdict: "fraudulent" as const, decidedAt: FRIDAY, handlingSeconds: 390 };
  const legitimate = { verdict: "legitimate" as const, decidedAt: FRIDAY, handlingSeconds: 390 };
  for (let i = 0; i < 42; i++) await decidedPayment(own, { amountMinor: 100_00, ...held }, fraudulent);
  for (let i = 0; i < 20; i++) await decidedPayment(own, { amountMinor: 60_00, ...gone }, fraudulent);
  const { transactionId } = await decidedPayment(own, { amountMinor: 100_00, ...gone }, fraudulent);
  for (let i = 0; i < 96; i++) await decidedPayment(own, { amountMinor: 100_00, ...held }, legitimate);
  for (let i = 0; i < 261; i++) await decidedPayment(own, { amountMinor: 10_00, ...gone }, legitimate);
  await insertPayment(own, { amountMinor: 996_090_00, action: "pass", ...gone });
  await own.db.transaction(async (tx) => {
    await tx.insert(ledger).values({
      transactionId,
      outcomeId: newId(),
      bookedAt: FRIDAY,
      occurredAt: WEDNESDAY,
      attemptedMinor: 0,
      preventedMinor: 0,
      missedMinor: 0,
      recoveredMinor: 350_00,
      falsePositiveMinor: 0,
      lostMarginMinor: 0,
      reviewCostMinor: 0,
    });
  });

  const figures = await week("2026-W12", "transaction", NEXT_MONDAY, own);
  const view = weekView(figures, "EUR");
  expect(view.totals).toMatchObject({
    settled: "1000000.00",
    attempted: "5500.00",
    prevented: "4200.00",
    gross: "1300.00",
    recovered: "350.00",
    net: "950.00",
    falsePositive: "9600.00",
    lostMargin: "192.00",
    reviewCost: "1638.00",
    totalCost: "2780.00",
    costPerCase: "3.90",
    fraudRateBp: 13,
    netRateBp: 9.5,
    totalCostBp: 27.8,
    valueDetection: 0.763636,
    fraudulent: 63,
    legitimate: 357,
  });
  expect(view.totals.precision).toMatchObject({ share: 0.15, count: 63, of: 420 });
  // Wilson's interval (1927) for 63 of 420 at 95 %, from the formula in 40-digit decimal arithmetic.
  expect(view.totals.precision?.low).toBeCloseTo(0.1190305757958668, 6);
  expect(view.totals.precision?.high).toBeCloseTo(0.18731382756186, 6);
  expect(view.typologies).toEqual([
    { typology: "details_theft", findings: 63, attempted: "5500.00", prevented: "4200.00" },
  ]);
  expect(view.largest).toHaveLength(3);
  expect(view.largest.every((one) => one.attempted === "100.00")).toBe(true);
});

describe("a reversal", () => {
  test("brings every figure of a decision back to nothing", async () => {
    const { transactionId, decisionId } = await decidedPayment(
      world,
      { amountMinor: 12_345, occurredAt: WEDNESDAY, paymentState: "refused", action: "hold" },
      { verdict: "legitimate", decidedAt: FRIDAY, handlingSeconds: 77 },
    );
    expect(await balanceOf(transactionId)).toMatchObject({
      falsePositiveMinor: 12_345,
      lostMarginMinor: 247,
      reviewCostMinor: 77,
    });
    await world.db.transaction((tx) => reverseBooking(tx, decisionId, FRIDAY));
    await world.db.transaction((tx) => reverseBooking(tx, decisionId, FRIDAY));
    expect(Object.values(await balanceOf(transactionId)).every((figure) => figure === 0)).toBe(true);
    expect(await linesOf(transactionId)).toHaveLength(2);
  });

  test("leaves the review cost where the time was spent", async () => {
    const { transactionId, decisionId } = await decidedPayment(
      world,
      { amountMinor: 5_000, occurredAt: WEDNESDAY },
      { verdict: "fraudulent", decidedAt: FRIDAY, handlingSeconds: 60 },
    );
    await world.db.transaction((tx) => reverseBooking(tx, decisionId, NEXT_MONDAY, "review_cost"));
    expect(await balanceOf(transactionId)).toMatchObject({
      attemptedMinor: 0,
      missedMinor: 0,
      reviewCostMinor: 60,
    });
  });
});

describe("what a finding books", () => {
  test("fraud that had been passed is missed, and so is fraud once decided legitimate", async () => {
    const passed = await decidedPayment(
      world,
      { amountMinor: 700, occurredAt: WEDNESDAY, action: "pass" },
      { verdict: "fraudulent", decidedAt: FRIDAY },
    );
    expect(await balanceOf(passed.transactionId)).toMatchObject({ attemptedMinor: 700, missedMinor: 700 });
    const alerted = await decidedPayment(
      world,
      { amountMinor: 900, occurredAt: WEDNESDAY },
      { verdict: "fraudulent", decidedAt: FRIDAY },
    );
    expect(await balanceOf(alerted.transactionId)).toMatchObject({ attemptedMinor: 900, missedMinor: 0 });
    const cleared = await decidedPayment(
      world,
      { amountMinor: 1_100, occurredAt: WEDNESDAY },
      { verdict: "legitimate", decidedAt: FRIDAY },
    );
    await correct(cleared, "fraudulent");
    expect(await balanceOf(cleared.transactionId)).toMatchObject({
      attemptedMinor: 1_100,
      missedMinor: 1_100,
    });
  });

  test("a payment the customer made costs the review alone", async () => {
    const { transactionId } = await decidedPayment(
      world,
      { amountMinor: 80_000, occurredAt: WEDNESDAY, paymentState: "held", action: "hold" },
      { verdict: "customer_misuse", decidedAt: FRIDAY, handlingSeconds: 3_600 },
    );
    const { reviewCostMinor, ...money } = await balanceOf(transactionId);
    expect(reviewCostMinor).toBe(DEFAULT_TERMS.reviewCostMinorPerHour);
    expect(Object.values(money).every((figure) => figure === 0)).toBe(true);
  });

  test("a payment in a currency without a rate is counted, not valued", async () => {
    const own = await testWorld();
    await decidedPayment(
      own,
      { amountMinor: 5_000, currency: "KWD", amountBaseMinor: null, occurredAt: WEDNESDAY },
      { verdict: "fraudulent", decidedAt: FRIDAY, handlingSeconds: 36 },
    );
    const { totals, typologies } = await week("2026-W12", "transaction", NEXT_MONDAY, own);
    expect(totals).toMatchObject({
      attemptedMinor: 0,
      settledMinor: 0,
      reviewCostMinor: 36,
      payments: 1,
      unpriced: 1,
      fraudulent: 1,
      grossPpm: null,
      valueDetectionPpm: null,
    });
    expect(typologies).toMatchObject([{ findings: 1, attemptedMinor: 0 }]);
  });
});

async function correct(
  on: { transactionId: string; caseId: string; decisionId: string },
  verdict: "fraudulent" | "legitimate",
  decidedAt = FRIDAY,
) {
  const { decisionId, ...target } = on;
  await world.db.update(decisions).set({ supersededAt: decidedAt }).where(eq(decisions.id, decisionId));
  await world.db.transaction((tx) => reverseBooking(tx, decisionId, decidedAt, "review_cost"));
  return decide(world, target, { verdict, decidedAt, kind: "correction" });
}

const bookFraudOutcome = (transactionId: string, bookedAt: Date) =>
  world.db.transaction((tx) =>
    bookOutcome(tx, {
      outcomeId: newId(),
      transactionId,
      verdict: "fraudulent",
      typology: "other",
      terms: DEFAULT_TERMS,
      bookedAt,
    }),
  );

describe("outcomes and decisions on one payment", () => {
  test("an outcome that overturns a verdict replaces its money and keeps its review cost", async () => {
    const { transactionId } = await decidedPayment(
      world,
      { amountMinor: 40_000, occurredAt: WEDNESDAY },
      { verdict: "legitimate", decidedAt: FRIDAY, handlingSeconds: 120 },
    );
    await bookFraudOutcome(transactionId, NEXT_MONDAY);
    expect(await balanceOf(transactionId)).toMatchObject({
      attemptedMinor: 40_000,
      missedMinor: 40_000,
      falsePositiveMinor: 0,
      reviewCostMinor: 120,
    });
  });

  test("a verdict after a fraud outcome does not count the fraud twice, nor undo it", async () => {
    for (const verdict of ["fraudulent", "legitimate"] as const) {
      const transactionId = await insertPayment(world, { amountMinor: 2_500, occurredAt: WEDNESDAY });
      const caseId = await insertCase(world, transactionId, WEDNESDAY);
      await bookFraudOutcome(transactionId, FRIDAY);
      await decide(
        world,
        { caseId, transactionId },
        { verdict, decidedAt: NEXT_MONDAY, handlingSeconds: 36 },
      );
      expect(await balanceOf(transactionId)).toMatchObject({
        attemptedMinor: 2_500,
        falsePositiveMinor: 0,
        reviewCostMinor: 36,
      });
    }
  });

  test("a correction is stronger than an outcome and takes its money back", async () => {
    const decided = await decidedPayment(
      world,
      { amountMinor: 3_300, occurredAt: WEDNESDAY },
      { verdict: "legitimate", decidedAt: FRIDAY },
    );
    await bookFraudOutcome(decided.transactionId, FRIDAY);
    await correct(decided, "legitimate", NEXT_MONDAY);
    expect(await balanceOf(decided.transactionId)).toMatchObject({ attemptedMinor: 0, missedMinor: 0 });
  });

  test("recoveries count while there is a loss to recover from", async () => {
    const transactionId = await insertPayment(world, { amountMinor: 9_000, occurredAt: WEDNESDAY });
    const caseId = await insertCase(world, transactionId, WEDNESDAY);
    await recover(transactionId, 4_000, WEDNESDAY);
    const settle = (isFraudulent: boolean) =>
      world.db.transaction((tx) =>
        settleRecoveries(tx, { transactionId, occurredAt: WEDNESDAY }, isFraudulent, FRIDAY),
      );
    await settle(false);
    expect(await balanceOf(transactionId)).toMatchObject({ recoveredMinor: 0 });
    const decisionId = await decide(
      world,
      { caseId, transactionId },
      { verdict: "fraudulent", decidedAt: FRIDAY },
    );
    expect(await balanceOf(transactionId)).toMatchObject({ attemptedMinor: 9_000, recoveredMinor: 4_000 });
    await settle(true);
    expect(await balanceOf(transactionId)).toMatchObject({ recoveredMinor: 4_000 });
    await correct({ transactionId, caseId, decisionId }, "legitimate");
    expect(await balanceOf(transactionId)).toMatchObject({ attemptedMinor: 0, recoveredMinor: 0 });
  });
});

describe("which week", () => {
  test("a late finding belongs to the payment's week in one view and to its booking's in the other", async () => {
    const own = await testWorld();
    const facts = { amountMinor: 1_000, occurredAt: WEDNESDAY };
    await decidedPayment(own, facts, { verdict: "fraudulent", decidedAt: new Date("2026-04-01T00:00:00Z") });
    const later = new Date("2026-04-10T00:00:00Z");
    const grossOf = async (label: string, by: "transaction" | "booking") =>
      (await week(label, by, later, own)).totals.grossMinor;
    expect(await grossOf("2026-W12", "transaction")).toBe(1_000);
    expect(await grossOf("2026-W14", "transaction")).toBe(0);
    expect(await grossOf("2026-W12", "booking")).toBe(0);
    expect(await grossOf("2026-W14", "booking")).toBe(1_000);
  });

  test("the week before is taken as it was known at the same age", async () => {
    const own = await testWorld();
    const sunday = new Date("2026-03-15T12:00:00Z");
    const facts = { amountMinor: 500, occurredAt: sunday };
    await decidedPayment(own, facts, { verdict: "fraudulent", decidedAt: new Date("2026-03-16T06:00:00Z") });
    await decidedPayment(own, facts, { verdict: "fraudulent", decidedAt: new Date("2026-03-17T06:00:00Z") });
    const { previous, totals } = await week("2026-W12", "transaction", NEXT_MONDAY, own);
    expect(totals.attemptedMinor).toBe(0);
    expect(previous).toMatchObject({ week: "2026-W11", totals: { attemptedMinor: 500, fraudulent: 1 } });
    expect((await week("2026-W11", "transaction", NEXT_MONDAY, own)).totals.attemptedMinor).toBe(1_000);
  });

  test("sums of local weeks make up the sum of the payments, none counted twice", async () => {
    const own = await testWorld();
    const times = [
      "2026-03-22T22:30:00Z",
      "2026-03-22T23:00:00Z",
      "2026-03-29T21:59:59.999Z",
      "2026-03-29T22:00:00Z",
    ];
    for (const [index, time] of times.entries()) {
      await insertPayment(own, { amountMinor: 10 ** index, occurredAt: new Date(time) });
    }
    const settled = async (label: string) =>
      (
        await weekFigures(own.db, {
          week: label,
          by: "transaction",
          timeZone: "Europe/Paris",
          now: new Date("2026-05-01T00:00:00Z"),
        })
      ).totals.settledMinor;
    expect([await settled("2026-W12"), await settled("2026-W13"), await settled("2026-W14")]).toEqual([
      1, 110, 1000,
    ]);
  });
});
