import { describe, expect, test } from "vitest";
import { ledger } from "@/db/schema/cases";
import { weeklySummaryMail } from "@/emails/weekly-summary";
import { readLosses } from "@/lib/losses/losses";
import { weekFigures } from "@/lib/losses/read";
import { WeekView } from "@/lib/losses/schema";
import { weekView } from "@/lib/losses/view";
import { newId } from "@/lib/new-id";
import { testWorld, type World } from "../support/world";
import { decidedPayment, insertCase, insertPayment } from "./decided-payments";

// 2026-W12 is Monday 16 to Sunday 22 March.
const WEDNESDAY = new Date("2026-03-18T10:00:00Z");
const FRIDAY = new Date("2026-03-20T10:00:00Z");
const NEXT_MONDAY = new Date("2026-03-23T08:00:00Z");

const week = (label: string, by: "transaction" | "booking", now: Date, on: World) =>
  weekFigures(on.db, { week: label, by, timeZone: "UTC", now });

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

test("a payment in a currency without a rate is counted, not valued", async () => {
  const own = await testWorld();
  await decidedPayment(
    own,
    { amountMinor: 5_000, currency: "KWD", amountBaseMinor: null, occurredAt: WEDNESDAY },
    { verdict: "fraudulent", decidedAt: FRIDAY, handlingSeconds: 36 },
  );
  const { totals, typologies } = await week("2026-W12", "transaction", NEXT_MONDAY, own);
  expect(totals).toMatchObject({
    attemptedMinor: 0n,
    settledMinor: 0n,
    reviewCostMinor: 36n,
    payments: 1,
    unpriced: 1,
    fraudulent: 1,
    grossPpm: null,
    valueDetectionPpm: null,
  });
  expect(typologies).toMatchObject([{ findings: 1, attemptedMinor: 0n }]);
});

test("payments of the largest amount that intake takes add up to the unit, on the page and in the mail", async () => {
  const own = await testWorld();
  const largest = { amountMinor: Number.MAX_SAFE_INTEGER, occurredAt: WEDNESDAY };
  const held = { ...largest, paymentState: "held" as const, action: "hold" as const };
  for (let i = 0; i < 2; i++) {
    await decidedPayment(own, { ...largest, action: "pass" }, { verdict: "fraudulent", decidedAt: FRIDAY });
    await decidedPayment(own, held, { verdict: "legitimate", decidedAt: FRIDAY });
  }
  const ctx = own.ctx(await own.person("auditor"), NEXT_MONDAY);
  const view = WeekView.parse(await readLosses(ctx, { week: "2026-W12", by: "transaction" }));
  // 2 × 9007199254740991.
  const both = "180143985094819.82";
  expect(view.totals).toMatchObject({
    settled: both,
    attempted: both,
    prevented: "0.00",
    gross: both,
    missed: both,
    net: both,
    falsePositive: both,
    // Two halves of 2 %, each rounded by itself: 180143985094820.
    lostMargin: "3602879701896.40",
    totalCost: "183746864796716.22",
    fraudRateBp: 10_000,
    netRateBp: 10_000,
    totalCostBp: 10_200,
    valueDetection: 0,
  });
  expect(view.change).toMatchObject({ gross: both, totalCost: "183746864796716.22" });
  expect(view.typologies).toMatchObject([{ findings: 2, attempted: both }]);
  expect(view.largest.map((one) => one.attempted)).toEqual(["90071992547409.91", "90071992547409.91"]);
  const mail = await weeklySummaryMail({ view, appUrl: "https://cupel.example.test", unsubscribeUrl: null });
  expect(mail.text).toContain("Gross loss: 180\u202f143\u202f985\u202f094\u202f819.82\u00a0EUR");
  expect(mail.html).toContain("183\u202f746\u202f864\u202f796\u202f716.22");
});

describe("which week", () => {
  test("a late finding belongs to the payment's week in one view and to its booking's in the other", async () => {
    const own = await testWorld();
    const facts = { amountMinor: 1_000, occurredAt: WEDNESDAY };
    await decidedPayment(own, facts, { verdict: "fraudulent", decidedAt: new Date("2026-04-01T00:00:00Z") });
    const later = new Date("2026-04-10T00:00:00Z");
    const grossOf = async (label: string, by: "transaction" | "booking") =>
      (await week(label, by, later, own)).totals.grossMinor;
    expect(await grossOf("2026-W12", "transaction")).toBe(1_000n);
    expect(await grossOf("2026-W14", "transaction")).toBe(0n);
    expect(await grossOf("2026-W12", "booking")).toBe(0n);
    expect(await grossOf("2026-W14", "booking")).toBe(1_000n);
  });

  test("the week before is taken as it was known at the same age", async () => {
    const own = await testWorld();
    const sunday = new Date("2026-03-15T12:00:00Z");
    const facts = { amountMinor: 500, occurredAt: sunday };
    await decidedPayment(own, facts, { verdict: "fraudulent", decidedAt: new Date("2026-03-16T06:00:00Z") });
    await decidedPayment(own, facts, { verdict: "fraudulent", decidedAt: new Date("2026-03-17T06:00:00Z") });
    const { previous, totals } = await week("2026-W12", "transaction", NEXT_MONDAY, own);
    expect(totals.attemptedMinor).toBe(0n);
    expect(previous).toMatchObject({ week: "2026-W11", totals: { attemptedMinor: 500n, fraudulent: 1 } });
    expect((await week("2026-W11", "transaction", NEXT_MONDAY, own)).totals.attemptedMinor).toBe(1_000n);
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
      1n,
      110n,
      1000n,
    ]);
  });
});

test("the workload is what came in, what was done, and what was left when the week ended", async () => {
  const own = await testWorld();
  const open = async (openedAt: string, more: Parameters<typeof insertCase>[3]) => {
    const at = new Date(openedAt);
    const transactionId = await insertPayment(own, { amountMinor: 100, occurredAt: at });
    return insertCase(own, transactionId, at, more);
  };
  const waiting = { state: "open" as const, decidedAt: null };
  // It lapsed when it was closed, which may be later than it was to.
  const planned = new Date("2026-03-11T00:00:00Z");
  // Opened before the week: one decided in it, one after it, one lapsed in it, one overdue and still waiting.
  await open("2026-03-10T00:00:00Z", { decidedAt: WEDNESDAY });
  await open("2026-03-10T00:00:00Z", { decidedAt: NEXT_MONDAY });
  await open("2026-03-05T00:00:00Z", {
    ...waiting,
    state: "lapsed",
    lapsesAt: planned,
    changedAt: WEDNESDAY,
  });
  await open("2026-03-10T00:00:00Z", waiting);
  // Opened in it: one in time at its end, one decided.
  await open("2026-03-22T12:00:00Z", { ...waiting, dueAt: new Date("2026-03-23T12:00:00Z") });
  await open("2026-03-18T00:00:00Z", { decidedAt: FRIDAY });
  // Opened after it.
  await open("2026-03-23T00:00:00Z", waiting);
  const later = new Date("2026-03-25T00:00:00Z");
  expect((await week("2026-W12", "transaction", later, own)).workload).toEqual({
    opened: 2,
    decided: 2,
    waiting: 3,
    overdue: 2,
    lapsed: 1,
  });
  // While the week runs, it is what is left now.
  const { workload, maturity } = await week("2026-W13", "transaction", later, own);
  expect(workload).toMatchObject({ opened: 1, decided: 1, waiting: 3, overdue: 3 });
  expect(maturity.state).toBe("running");
});

test("a week of payments matures when its outcomes are in, a week of bookings when it is over", async () => {
  const own = await testWorld();
  const state = async (by: "transaction" | "booking", now: string) =>
    (await week("2026-W12", by, new Date(now), own)).maturity.state;
  // 120 days, the longer of the two periods of the first policy, behind Sunday 22 March.
  expect(await state("transaction", "2026-07-20T23:59:59Z")).toBe("immature");
  expect(await state("transaction", "2026-07-21T00:00:00Z")).toBe("mature");
  expect(await state("booking", "2026-03-22T23:59:59Z")).toBe("running");
  expect(await state("booking", "2026-03-23T00:00:00Z")).toBe("mature");
});
