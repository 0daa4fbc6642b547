import { expect, test } from "vitest";
import { fieldErrors } from "@/lib/field-errors";
import { termChanges } from "@/lib/policy/changes";
import { termsFaults } from "@/lib/policy/consistency";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { type PolicyTerms, ProposeInput } from "@/lib/policy/schema";

const paths = (changed: Partial<PolicyTerms>) =>
  termsFaults({ ...DEFAULT_TERMS, ...changed }).map(({ path }) => path);
const channels = (changed: Partial<PolicyTerms["channels"]>) => ({
  channels: { ...DEFAULT_TERMS.channels, ...changed },
});

test("the default terms agree with themselves", () => {
  expect(termsFaults(DEFAULT_TERMS)).toEqual([]);
});

test("a fixed review line may meet the hold line and not pass it", () => {
  const reviewThreshold = { kind: "fixed" as const, probability: 0.4 };
  expect(paths({ reviewThreshold, holdThreshold: 0.4 })).toEqual([]);
  expect(paths({ reviewThreshold, holdThreshold: 0.39 })).toEqual(["holdThreshold"]);
});

test("the prior odds stay below both lines, so that the first day is not a flood", () => {
  expect(paths({ baseRate: 0.5, holdThreshold: 0.5 })).toEqual(["baseRate"]);
  expect(paths({ reviewThreshold: { kind: "fixed", probability: 0.01 } })).toEqual(["baseRate"]);
  expect(paths({ reviewThreshold: { kind: "fixed", probability: 0.011 } })).toEqual([]);
});

test("shares leave room for alerts, for the order, and for every sample that is drawn", () => {
  expect(paths({ secondReviewShare: 0.97 })).toEqual(["secondReviewShare"]);
  expect(paths({ secondReviewShare: 0.9 })).toEqual([]);
  expect(paths({ overdueEvery: 2, sampleEvery: 3 })).toEqual(["overdueEvery"]);
  expect(paths({ overdueEvery: 2, sampleEvery: 4 })).toEqual([]);
  expect(paths({ sampleShare: 0.06 })).toEqual(["sampleEvery"]);
  expect(paths({ dailyCapacity: 99 })).toEqual(["reviewThreshold.casesPerDay"]);
});

test("costs that make one act always the better one are refused, each by its field", () => {
  expect(paths({ falsePositiveCostMinor: 0 })).toEqual(["falsePositiveCostMinor"]);
  expect(paths({ falsePositiveCostMinor: 0, lossGivenFraud: 0 })).toEqual([
    "falsePositiveCostMinor",
    "lossGivenFraud",
  ]);
});

test("every hold outlasts the undo window, its deadline and its last minutes, and only what can be held is held", () => {
  const held = (holdMinutes: number) =>
    channels({ direct_debit: { onHold: "hold", holdMinutes, atExpiry: "refuse" } });
  const path = ["channels.direct_debit.holdMinutes"];
  expect(paths({ ...held(120), undoMinutes: 119 })).toEqual([]);
  expect(paths({ ...held(120), undoMinutes: 120 })).toEqual(path);
  expect(paths(held(119))).toEqual(path);
  expect(paths({ ...held(120), expiringMinutes: 120 })).toEqual(path);
  const instant = channels({ instant_transfer: { onHold: "hold", holdMinutes: 240, atExpiry: "refuse" } });
  expect(paths(instant)).toEqual(["channels.instant_transfer.onHold"]);
});

test("a review case lives at least until its deadline", () => {
  const deadlineMinutes = { ...DEFAULT_TERMS.deadlineMinutes, review: 1441 };
  expect(paths({ lifetimeDays: 1, deadlineMinutes })).toEqual(["lifetimeDays"]);
});

test("every fault is named at once", () => {
  expect(paths({ falsePositiveCostMinor: 0, baseRate: 0.9, sampleShare: 0.2 })).toEqual([
    "baseRate",
    "sampleEvery",
    "falsePositiveCostMinor",
  ]);
});

test("differences are named by path, also where a threshold changes its kind", () => {
  const after: PolicyTerms = {
    ...DEFAULT_TERMS,
    reviewThreshold: { kind: "fixed", probability: 0.2 },
    takeNextOnly: true,
    ...channels({ direct_debit: { ...DEFAULT_TERMS.channels.direct_debit, atExpiry: "refuse" } }),
  };
  expect(termChanges(DEFAULT_TERMS, after)).toEqual([
    { path: "reviewThreshold.kind", from: "capacity", to: "fixed" },
    { path: "reviewThreshold.casesPerDay", from: 100, to: null },
    { path: "takeNextOnly", from: false, to: true },
    { path: "channels.direct_debit.atExpiry", from: "release", to: "refuse" },
    { path: "reviewThreshold.probability", from: null, to: 0.2 },
  ]);
  expect(termChanges(after, after)).toEqual([]);
});

test("a proposal is told everything that is wrong with it at once, field by field", () => {
  const terms = { ...DEFAULT_TERMS, falsePositiveCostMinor: 0, holdThreshold: 0.005 };
  const parsed = ProposeInput.safeParse({ terms, reason: "  ", basedOnVersion: 1 });
  expect(parsed.success ? [] : fieldErrors(parsed.error)).toEqual([
    { path: "terms.baseRate", message: expect.stringContaining("hold threshold") },
    { path: "terms.falsePositiveCostMinor", message: expect.stringContaining("above 0") },
    { path: "reason", message: "needs a reason" },
  ]);
  const strange = { ...DEFAULT_TERMS, dailyCapacity: 1.5, colour: "red", order: "by taste" };
  const refused = ProposeInput.safeParse({ terms: strange, reason: "Why not", basedOnVersion: 1 });
  expect((refused.success ? [] : fieldErrors(refused.error)).map(({ path }) => path).sort()).toEqual([
    "terms.colour",
    "terms.dailyCapacity",
    "terms.order",
  ]);
});
