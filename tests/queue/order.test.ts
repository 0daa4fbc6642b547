import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { firstBehind, isBehind, Order, type Place, type Rankable, rank } from "@/lib/cases/ranking/order";
import { sortDescending } from "@/lib/cases/ranking/sort";
import { logitOf, probabilityOf } from "@/lib/decibans";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { valueAtRisk } from "@/lib/policy/rules";
import type { PolicyTerms } from "@/lib/policy/schema";

const NOW_MS = Date.parse("2026-05-04T10:00:00Z");
const MINUTE_MS = 60_000;

type Item = {
  name: string;
  logit: number;
  leverage?: number;
  amount?: number;
  holdEndsInMinutes?: number | null;
};

const rankable = (items: readonly Item[]): Rankable => ({
  count: items.length,
  logit: (i) => (items[i] as Item).logit,
  leverage: (i) => items[i]?.leverage ?? 1,
  amountBaseMinor: (i) => items[i]?.amount ?? 100,
  holdEndMs: (i) => NOW_MS + (items[i]?.holdEndsInMinutes ?? Number.POSITIVE_INFINITY) * MINUTE_MS,
});

const named = (items: readonly Item[], terms: PolicyTerms) =>
  Array.from(rank(rankable(items), terms, NOW_MS).order.all(), (i) => items[i]?.name).join(" ");

const terms = (more: Partial<PolicyTerms>): PolicyTerms => ({
  ...DEFAULT_TERMS,
  expiringMinutes: 30,
  ...more,
});

describe("by value at risk", () => {
  // Our own construction: p × amount is 18, 100, 150, 60 and 90 when all is lost and a false alarm costs nothing.
  const items: Item[] = [
    { name: "A", logit: logitOf(0.9), amount: 2_000 },
    { name: "B", logit: logitOf(0.2), amount: 50_000 },
    { name: "C", logit: logitOf(0.05), amount: 300_000 },
    { name: "D", logit: logitOf(0.6), amount: 10_000 },
    { name: "E", logit: logitOf(0.01), amount: 900_000 },
  ];

  test("the expected loss decides: C B E D A", () => {
    const plain = terms({ order: "value_at_risk", lossGivenFraud: 1, falsePositiveCostMinor: 0 });
    expect(named(items, plain)).toBe("C B E D A");
  });

  test("the cost of a false alarm counts against payments that are hardly suspect", () => {
    const costly = terms({ order: "value_at_risk", lossGivenFraud: 1, falsePositiveCostMinor: 5_000 });
    // 1300, 6000, 10250, 4000, 4050 minor units.
    expect(
      items.map(({ logit, amount }) => Math.round(valueAtRisk(logit, amount as number, costly))),
    ).toEqual([1_300, 6_000, 10_250, 4_000, 4_050]);
    expect(named(items, costly)).toBe("C B E D A");
    const dear = terms({ order: "value_at_risk", lossGivenFraud: 1, falsePositiveCostMinor: 50_000 });
    expect(named(items, dear)).toBe("A D B C E");
  });
});

test("by probability the amount does not matter", () => {
  const items: Item[] = [
    { name: "unlikely", logit: -3, amount: 1_000_000 },
    { name: "likely", logit: 2, amount: 1 },
    { name: "even", logit: 0 },
  ];
  expect(named(items, terms({ order: "probability" }))).toBe("likely even unlikely");
});

test("by learning value, doubt with little experience comes before certainty and before well-known doubt", () => {
  const items: Item[] = [
    { name: "certain", logit: 6, leverage: 3 },
    { name: "known-doubt", logit: 0, leverage: 0.1 },
    { name: "new-doubt", logit: 0.2, leverage: 2 },
  ];
  // leverage × p(1 − p): 0.0074, 0.025, 0.495.
  expect(named(items, terms({ order: "learning_value" }))).toBe("new-doubt known-doubt certain");
});

describe("in every order", () => {
  const items: Item[] = [
    { name: "top", logit: 5, amount: 10 },
    { name: "small-hold", logit: -5, amount: 200, holdEndsInMinutes: 29 },
    { name: "calm-hold", logit: -5.5, amount: 900, holdEndsInMinutes: 31 },
    { name: "large-hold", logit: -6, amount: 700, holdEndsInMinutes: 10 },
    { name: "over", logit: -7, amount: 5_000, holdEndsInMinutes: 0 },
    { name: "twin", logit: 5, amount: 10 },
  ];

  test.each(["probability", "value_at_risk", "learning_value"] as const)(
    "%s: holds about to expire come first, by amount, and ties stay in order of arrival",
    (order) => {
      const ranked = named(items, terms({ order })).split(" ");
      expect(ranked.slice(0, 2)).toEqual(["large-hold", "small-hold"]);
      expect(ranked.indexOf("twin")).toBe(ranked.indexOf("top") + 1);
    },
  );

  test("the ranking knows until when it is good", () => {
    const ranking = rank(rankable(items), terms({ order: "probability" }), NOW_MS);
    expect(ranking.expiring).toBe(2);
    // calm-hold enters the last half hour in a minute.
    expect(ranking.goodUntilMs).toBe(NOW_MS + MINUTE_MS);
  });
});

describe("properties", () => {
  const keys = fc.array(
    fc.oneof(
      fc.double({ noNaN: true, noDefaultInfinity: true }),
      fc.constantFrom(0, -0, 1, -1, Number.MIN_VALUE, -Number.MIN_VALUE, Number.MAX_VALUE, -Number.MAX_VALUE),
      fc.integer({ min: -3, max: 3 }),
    ),
    { maxLength: 300 },
  );

  test("the radix sort is a stable sort by comparison", () => {
    fc.assert(
      fc.property(keys, (values) => {
        const expected = values
          .map((_, i) => i)
          .sort((a, b) => (values[b] as number) - (values[a] as number) || a - b);
        // A difference of huge numbers may be infinite but never has the wrong sign.
        expect(Array.from(sortDescending(Float64Array.from(values)))).toEqual(expected);
      }),
    );
  });

  test("the keys handed in are left as they were", () => {
    const values = Float64Array.of(3, -0, -5);
    sortDescending(values);
    expect(Object.is(values[1], -0)).toBe(true);
    expect(Array.from(values)).toEqual([3, -0, -5]);
  });

  const items = fc.array(
    fc.record({
      name: fc.constant("x"),
      logit: fc.integer({ min: -2, max: 2 }),
      leverage: fc.double({ min: 0, max: 4, noNaN: true }),
      amount: fc.integer({ min: 0, max: 5 }),
      holdEndsInMinutes: fc.option(fc.integer({ min: -5, max: 90 })),
    }),
    { maxLength: 60 },
  );

  test("an order lists every case once, and walking it by places visits the same cases", () => {
    fc.assert(
      fc.property(
        items,
        fc.constantFrom(...(["probability", "value_at_risk", "learning_value"] as const)),
        (list, order) => {
          const ranking = rank(rankable(list), terms({ order }), NOW_MS);
          expect([...ranking.order.all()].sort((a, b) => a - b)).toEqual(list.map((_, i) => i));
          const places: Place[] = Array.from(ranking.order.all(), (i, index) => ({
            expiring: index < ranking.expiring,
            key: ranking.keys[i] as number,
            number: i,
          }));
          for (const [index, place] of places.entries()) {
            expect(firstBehind(places.length, (at) => places[at] as Place, place)).toBe(index + 1);
            if (index > 0) expect(isBehind(place, places[index - 1] as Place)).toBe(true);
          }
        },
      ),
    );
  });

  test("the front that is worked out by itself is the front of the whole order", () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 400 }),
        fc.integer({ min: 1, max: 40 }),
        fc.array(fc.nat({ max: 399 }), { maxLength: 220 }),
        fc.infiniteStream(fc.integer({ min: 0, max: 1_000 })),
        (count, distinct, wanted, stream) => {
          const keys = Float64Array.from({ length: count }, () => (stream.next().value as number) % distinct);
          const first = [...new Set(wanted)].filter((i) => i < count).sort((a, b) => a - b);
          const whole = new Order(keys, first).all();
          const front = new Order(keys, first);
          expect(Array.from({ length: count }, (_, index) => front.at(index))).toEqual([...whole]);
        },
      ),
    );
  });

  test("raising one case's probability never lowers its place by probability or value at risk", () => {
    fc.assert(
      fc.property(
        items.filter((list) => list.length > 1),
        fc.nat(),
        fc.constantFrom(...(["probability", "value_at_risk"] as const)),
        (list, pick, order) => {
          const at = pick % list.length;
          const placeOf = (cases: typeof list) =>
            rank(rankable(cases), terms({ order }), NOW_MS).order.all().indexOf(at);
          const lifted = list.map((item, i) => (i === at ? { ...item, logit: item.logit + 1.5 } : item));
          expect(placeOf(lifted)).toBeLessThanOrEqual(placeOf(list));
          expect(probabilityOf((lifted[at] as Item).logit)).toBeGreaterThan(
            probabilityOf((list[at] as Item).logit),
          );
        },
      ),
    );
  });
});
