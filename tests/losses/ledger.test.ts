import { createHash } from "node:crypto";
import { eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { decisions, ledger } from "@/db/schema/cases";
import { outcomes } from "@/db/schema/outcomes";
import { bookOutcome, reverseBooking } from "@/lib/losses/book";
import { settleRecoveries } from "@/lib/losses/recoveries";
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
