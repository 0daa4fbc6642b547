import { expect, test } from "vitest";
import { draftOf, readDraft } from "@/components/policy/draft";
import { sayValue, termAt } from "@/components/policy/term-values";
import { TERM_GROUPS } from "@/components/policy/terms";
import { termChanges } from "@/lib/policy/changes";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import type { PolicyTerms } from "@/lib/policy/schema";

const euro = { code: "EUR", minorDigits: 2 };
const dinar = { code: "KWD", minorDigits: 3 };
const draft = draftOf(DEFAULT_TERMS, euro);
const say = (path: string, value: string | number | boolean | null) => sayValue(termAt(path), value, euro);

test("every term is in the form, and a form nobody touched gives the same terms back", () => {
  for (const currency of [euro, dinar]) {
    expect(readDraft(draftOf(DEFAULT_TERMS, currency), currency)).toEqual({
      terms: DEFAULT_TERMS,
      unreadable: [],
    });
  }
  const fixed: PolicyTerms = { ...DEFAULT_TERMS, reviewThreshold: { kind: "fixed", probability: 0.07 } };
  expect(readDraft(draftOf(fixed, euro), euro).terms).toEqual(fixed);
});

test("percentages come back as the shares they were, without stray digits", () => {
  for (let thousandths = 1; thousandths < 1000; thousandths++) {
    const holdThreshold = thousandths / 1000;
    expect(readDraft(draftOf({ ...DEFAULT_TERMS, holdThreshold }, euro), euro).terms?.holdThreshold).toBe(
      holdThreshold,
    );
  }
});

test("money is typed in the currency's units and kept in its minor ones", () => {
  const typed = readDraft({ ...draft, falsePositiveCostMinor: "4,35" }, euro);
  expect(typed.terms?.falsePositiveCostMinor).toBe(435);
  expect(readDraft({ ...draft, falsePositiveCostMinor: "4.35" }, dinar).terms?.falsePositiveCostMinor).toBe(
    4350,
  );
});

test("of the review threshold's two numbers the chosen kind's is read", () => {
  const fixed = { ...draft, "reviewThreshold.kind": "fixed", "reviewThreshold.probability": "12.5" };
  expect(readDraft(fixed, euro).terms?.reviewThreshold).toEqual({ kind: "fixed", probability: 0.125 });
  expect(readDraft({ ...fixed, "reviewThreshold.casesPerDay": "many" }, euro).unreadable).toEqual([]);
});

test("text where a number is wanted is named by its path", () => {
  const reading = readDraft(
    { ...draft, dailyCapacity: "a lot", undoMinutes: " ", "channels.card_remote.holdMinutes": "1e9999" },
    euro,
  );
  expect(reading).toEqual({
    terms: null,
    unreadable: ["dailyCapacity", "undoMinutes", "channels.card_remote.holdMinutes"],
  });
});

test("every difference there can be is said in words", () => {
  const path = (change: Partial<PolicyTerms>) => termChanges(DEFAULT_TERMS, { ...DEFAULT_TERMS, ...change });
  expect(path({ holdThreshold: 0.925 }).map(({ path, to }) => say(path, to))).toEqual(["92.5 %"]);
  expect(say("falsePositiveCostMinor", 500)).toBe("5.00 EUR");
  expect(say("deadlineMinutes.hold", 120)).toBe("2 h");
  expect(say("deadlineMinutes.sample", 3 * 1440)).toBe("3 days");
  expect(say("deadlineMinutes.review", 1440)).toBe("24 h");
  expect(say("expiringMinutes", 95)).toBe("1 h 35 min");
  expect(say("overdueEvery", 5)).toBe("every 5th case handed out");
  expect(say("sampleEvery", 22)).toBe("every 22nd case handed out");
  expect(say("sampleEvery", 11)).toBe("every 11th case handed out");
  expect(say("order", "value_at_risk")).toBe("Value at risk");
  expect(say("takeNextOnly", false)).toBe("No");
  expect(say("reviewThreshold.casesPerDay", null)).toBe("–");
  expect(termAt("channels.direct_debit.atExpiry").label).toBe("Direct debit: when the hold ends");
  expect(say("channels.direct_debit.onHold", "let_go")).toBe("Let it go and review");
});

test("no path of the terms is without words", () => {
  const known = new Set(TERM_GROUPS.flatMap(({ terms }) => terms.map(({ path }) => path)));
  const fixed: PolicyTerms = { ...DEFAULT_TERMS, reviewThreshold: { kind: "fixed", probability: 0.5 } };
  for (const terms of [DEFAULT_TERMS, fixed]) {
    const { channels, ...others } = terms;
    for (const { path } of termChanges({}, others)) expect(known, path).toContain(path);
    for (const { path } of termChanges({}, { channels }))
      expect(termAt(path).label).toMatch(/^[A-Z][\w, ]+: /);
  }
});
