// Long: every signal of the catalogue is tried beside the others, so that a missing one shows.
import { describe, expect, it } from "vitest";
import { CATALOGUE, DIMENSION, OFFSETS } from "@/lib/signals/catalogue";
import type { PaymentFields, PaymentHistory } from "@/lib/signals/facts";
import { readingOf } from "@/lib/signals/group";
import { coordinatesOf, formulasOf } from "@/lib/signals/signal";
import { isMissing, vectorOf } from "@/lib/signals/vectors";
import {
  activityOf,
  bareHistory,
  barePayment,
  DAY,
  entity,
  fullPayment,
  HOUR,
  labelsOf,
  NOON,
  noHistory,
} from "./example";

const log = (value: number, typical: number, high: number) =>
  Math.log((1 + value) / (1 + typical)) / Math.log((1 + high) / (1 + typical));

function measured(key: string, payment: PaymentFields, history: PaymentHistory) {
  const s = CATALOGUE.findIndex((signal) => signal.key === key);
  const signal = CATALOGUE[s];
  if (!signal) throw new Error(`No signal ${key}`);
  const { vector, missing } = vectorOf(payment, history);
  const from = OFFSETS[s] as number;
  const coordinates = vector.slice(from, from + coordinatesOf(signal));
  return {
    coordinates: [...coordinates],
    available: !isMissing(missing, s),
    reading: readingOf(signal, coordinates),
  };
}

describe("the catalogue", () => {
  it("documents every signal and gives each its own key", () => {
    expect(new Set(CATALOGUE.map(({ key }) => key)).size).toBe(CATALOGUE.length);
    for (const signal of CATALOGUE) {
      expect(signal.name.length).toBeGreaterThan(3);
      expect(signal.sentence).toMatch(/^[A-Z].*\.$/);
      expect(signal.needs.length).toBeGreaterThan(0);
      expect(formulasOf(signal)).toHaveLength(coordinatesOf(signal));
    }
  });

  it("measures nothing that describes a person", () => {
    const words =
      /\b(age of the (customer|person)|sex|gender|ethnic|religio|health|nationalit|birth|name)\b/i;
    for (const signal of CATALOGUE)
      expect(`${signal.name} ${signal.sentence} ${signal.needs}`).not.toMatch(words);
  });
});

describe("a vector", () => {
  it("has one coordinate per formula and ends in the bias", () => {
    const { vector } = vectorOf(fullPayment, noHistory());
    expect(vector).toHaveLength(DIMENSION);
    expect(vector.at(-1)).toBe(1);
  });

  it("stays finite and within -1 and 1 for the largest and the smallest payments", () => {
    const crowd = activityOf(
      ...Array.from({ length: 3_000 }, (_, i) => ({
        agoMs: i * 1_000,
        amountBaseMinor: Number.MAX_SAFE_INTEGER,
        other: `a${i}`,
      })),
    );
    const frauds = labelsOf(...Array.from({ length: 200 }, () => ({ agoMs: HOUR, label: 1 as const })));
    const full = entity(crowd, frauds);
    for (const amountBaseMinor of [0, 1, Number.MAX_SAFE_INTEGER, null]) {
      for (const history of [noHistory(), { account: full, card: full, device: full, counterparty: full }]) {
        const { vector } = vectorOf({ ...fullPayment, amountBaseMinor }, history);
        for (const x of vector) expect(Math.abs(x)).toBeLessThanOrEqual(1);
      }
    }
  });

  it("is the same for the same payment and history", () => {
    const history = { ...noHistory(), account: entity(activityOf({ agoMs: HOUR }, { agoMs: 3 * DAY })) };
    expect(vectorOf(fullPayment, history)).toEqual(vectorOf(fullPayment, history));
  });

  it("sees neither later payments nor itself", () => {
    const past = [
      { agoMs: HOUR, id: "01" },
      { agoMs: 2 * DAY, id: "02" },
    ];
    const later = [
      { agoMs: -1, id: "03" },
      { agoMs: 0, id: "05" },
      { agoMs: 0, id: "06" },
    ];
    const payment = { ...fullPayment, id: "05" };
    const without = vectorOf(payment, { ...noHistory(), account: entity(activityOf(...past)) });
    const labels = labelsOf({ agoMs: 0, label: 1, transactionId: "05" }, { agoMs: -5, label: 1 });
    const withLater = vectorOf(payment, {
      ...noHistory(),
      account: entity(activityOf(...past, ...later), labels),
    });
    expect(withLater).toEqual(without);
  });
});

describe("a signal", () => {
  it("whose field is missing leaves zeros and a mark, and only those signals do", () => {
    const { vector, missing } = vectorOf(barePayment, bareHistory());
    const unavailable = CATALOGUE.filter((_, s) => isMissing(missing, s)).map(({ key }) => key);
    expect(unavailable).toEqual([
      "amount_against_usual",
      "amount_against_largest",
      ...["card", "device"].flatMap((kind) =>
        ["1h", "24h", "7d", "30d"].map((window) => `${kind}_${window}`),
      ),
      "new_counterparty",
      "new_device",
      "new_country",
      "accounts_on_device",
      "account_age",
      "idle_time",
      "unusual_hour",
      "cross_border",
      "remote",
      "authentication",
      "upstream_score",
      "rule_hits",
      "device_fraud_14d",
      "device_fraud_so_far",
      "card_fraud_so_far",
    ]);
    for (const key of unavailable) {
      const s = CATALOGUE.findIndex((signal) => signal.key === key);
      const from = OFFSETS[s] as number;
      expect([...vector.slice(from, OFFSETS[s + 1] ?? DIMENSION - 1)].every((x) => x === 0)).toBe(true);
    }
  });

  it("of the amount grows with it and bends at its hinges", () => {
    const size = (amountBaseMinor: number | null) =>
      measured("amount_size", { ...fullPayment, amountBaseMinor }, noHistory());
    expect(size(5_000).coordinates).toEqual([0, 0, 0, 0, 0]);
    expect(size(22_000).coordinates).toEqual([
      expect.closeTo(log(220, 50, 5_000), 12),
      1,
      expect.closeTo(log(220, 200, 250), 12),
      0,
      0,
    ]);
    expect(size(22_000).reading).toBe("about 220");
    expect(size(9_000_000).reading).toBe("about 5\u202f000 or more");
    expect(size(null)).toEqual({
      coordinates: [0, 0, 0, 0, 0],
      available: false,
      reading: expect.any(String),
    });
  });

  it("of the amount against the account's past takes the median and the largest of payments in the same direction", () => {
    const account = entity(
      activityOf(
        { agoMs: HOUR, amountBaseMinor: 1_900 },
        { agoMs: DAY, amountBaseMinor: 3_900 },
        { agoMs: 2 * DAY, amountBaseMinor: 9_900 },
        { agoMs: 3 * DAY, amountBaseMinor: 900_000, incoming: true },
        { agoMs: 31 * DAY, amountBaseMinor: 800_000 },
        { agoMs: 4 * DAY, amountBaseMinor: Number.NaN },
      ),
    );
    const payment = { ...fullPayment, amountBaseMinor: 19_900 };
    const usual = measured("amount_against_usual", payment, { ...noHistory(), account });
    expect(usual.coordinates[0]).toBeCloseTo(Math.log10(200 / 40), 12);
    expect(usual.reading).toBe("5 times the usual");
    const largest = measured("amount_against_largest", payment, { ...noHistory(), account });
    expect(largest.coordinates).toEqual([expect.closeTo(Math.log10(2), 12), 1, 0]);
  });

  it.each(["account", "card", "device", "counterparty"] as const)(
    "of the activity of the %s counts each window up to, not with, its far end",
    (kind) => {
      const history = {
        ...noHistory(),
        [kind]: entity(
          activityOf(
            { agoMs: 0 },
            { agoMs: HOUR - 1, amountBaseMinor: Number.NaN },
            { agoMs: HOUR },
            { agoMs: DAY },
            { agoMs: 7 * DAY },
            { agoMs: 30 * DAY },
          ),
        ),
      };
      const counts = ["1h", "24h", "7d", "30d"].map((window) =>
        measured(`${kind}_${window}`, fullPayment, history),
      );
      expect(counts.map(({ reading }) => reading)).toEqual([
        "2 payments, about 10 in all",
        "3 payments, about 20 in all",
        "4 payments, about 30 in all",
        "5 payments, about 40 in all",
      ]);
      expect(counts[0]?.coordinates[0]).toBeCloseTo(log(2, 0, 20), 12);
    },
  );

  it("of a first time looks back thirty days over the account's own payments", () => {
    const known = { other: "shop-1", device: "device-1", country: "FR" };
    const first = (past: object) => {
      const history = { ...noHistory(), account: entity(activityOf({ agoMs: DAY, ...past })) };
      return ["new_counterparty", "new_device", "new_country"].map(
        (key) => measured(key, fullPayment, history).coordinates[0],
      );
    };
    expect(first(known)).toEqual([0, 0, 0]);
    expect(first({})).toEqual([1, 1, 1]);
    expect(first({ ...known, device: null })).toEqual([0, 1, 0]);
    const old = {
      ...noHistory(),
      account: entity(activityOf({ agoMs: 30 * DAY, ...known }, { agoMs: DAY })),
    };
    expect(measured("new_counterparty", fullPayment, old).reading).toBe("first time in 30 days");
  });

  it("of sharing counts different accounts within 24 hours", () => {
    const shared = entity(
      activityOf(
        { agoMs: HOUR, other: "a" },
        { agoMs: 2 * HOUR, other: "b" },
        { agoMs: 3 * HOUR, other: "a" },
        { agoMs: 24 * HOUR, other: "c" },
      ),
    );
    const history = { ...noHistory(), device: shared, counterparty: shared };
    expect(measured("accounts_on_device", fullPayment, history).reading).toBe("2 accounts");
    expect(measured("accounts_paying_counterparty", fullPayment, history).reading).toBe("2 accounts");
  });

  it("of time tells the account's age, its quiet and its hours", () => {
    const account = entity(
      activityOf(
        ...Array.from({ length: 10 }, (_, i) => ({ agoMs: (i + 1) * DAY + (i < 4 ? 6 : 2) * HOUR })),
      ),
    );
    const history = { ...noHistory(), account };
    expect(measured("account_age", fullPayment, history)).toMatchObject({
      coordinates: [0],
      reading: "365 days",
    });
    expect(measured("idle_time", fullPayment, history).reading).toBe("30 h");
    expect(measured("hour_of_day", fullPayment, history).reading).toBe("12:00 UTC");
    expect(
      measured("hour_of_day", { ...fullPayment, occurredAtMs: NOON - 16 * HOUR - 1_800_000 }, history)
        .reading,
    ).toBe("19:30 UTC");
    expect(measured("unusual_hour", fullPayment, history).reading).toBe(
      "60 % of its payments near this hour",
    );
    const few = { ...noHistory(), account: entity(activityOf({ agoMs: DAY }, { agoMs: 2 * DAY })) };
    expect(measured("unusual_hour", fullPayment, few).available).toBe(false);
  });

  it("of an hour near midnight counts around the clock", () => {
    const account = entity(
      activityOf(...Array.from({ length: 5 }, (_, i) => ({ agoMs: (i + 1) * DAY + 11 * HOUR }))),
    );
    const late = { ...fullPayment, occurredAtMs: NOON + 11.5 * HOUR };
    expect(measured("unusual_hour", late, { ...noHistory(), account }).reading).toBe(
      "100 % of its payments near this hour",
    );
  });

  it("of the context follows the fields", () => {
    const context = (key: string, change: Partial<PaymentFields> = {}) =>
      measured(key, { ...fullPayment, ...change }, noHistory());
    expect(context("cross_border").coordinates).toEqual([1]);
    expect(context("cross_border", { counterpartyCountry: "DE" }).coordinates).toEqual([0]);
    expect(context("channel").coordinates).toEqual([0, 1, 0, 0, 0, 0]);
    expect(context("channel").reading).toBe("card remote");
    expect(context("incoming", { direction: "incoming" }).coordinates).toEqual([1]);
    expect(context("remote", { remote: false })).toMatchObject({ coordinates: [0], available: true });
    expect(context("authentication").reading).toBe("single");
    expect(context("upstream_score")).toMatchObject({ coordinates: [0.5], reading: "0.75" });
    expect(context("rule_hits").reading).toBe("3 rules");
    expect(context("rule_hits", { ruleHits: 0 })).toMatchObject({ coordinates: [0], available: true });
  });

  it("of very small amounts counts the card's, or without a card the account's", () => {
    const small = (count: number) =>
      entity(
        activityOf(
          { agoMs: HOUR, amountBaseMinor: 501 },
          ...Array.from({ length: count }, () => ({ agoMs: HOUR, amountBaseMinor: 500 })),
        ),
      );
    const history = { ...noHistory(), account: small(4), card: small(2) };
    expect(measured("small_burst", fullPayment, history)).toMatchObject({ reading: "2 very small payments" });
    expect(
      measured("small_burst", { ...fullPayment, cardRef: null }, { ...history, card: null }).reading,
    ).toBe("4 very small payments");
  });

  it.each([
    ["counterparty_fraud_7d", 1, 1],
    ["counterparty_fraud_14d", 2, 1],
    ["counterparty_fraud_30d", 2, 2],
    ["counterparty_fraud_so_far", 3, 2],
    ["account_fraud_14d", 2, 1],
    ["account_fraud_so_far", 3, 2],
    ["device_fraud_14d", 2, 1],
    ["device_fraud_so_far", 3, 2],
    ["card_fraud_so_far", 3, 2],
  ])("of known fraud, %s, counts the decided payments of its window", (key, fraudulent, legitimate) => {
    const labels = labelsOf(
      { agoMs: DAY, label: 1 },
      { agoMs: DAY, label: -1 },
      { agoMs: 8 * DAY, label: 1 },
      { agoMs: 15 * DAY, label: -1 },
      { agoMs: 40 * DAY, label: 1 },
    );
    const kind = key.split("_")[0] as string;
    const share = (fraudulent + 0.04) / (fraudulent + legitimate + 2);
    const logit = (p: number) => Math.log(p / (1 - p));
    const { coordinates, reading } = measured(key, fullPayment, {
      ...noHistory(),
      [kind]: entity(undefined, labels),
    });
    expect(coordinates).toEqual([
      expect.closeTo((logit(share) - logit(0.02)) / (logit(0.9) - logit(0.02)), 12),
      expect.closeTo(log(fraudulent, 0, 10), 12),
    ]);
    expect(reading).toContain(
      fraudulent === 1 ? "1 fraudulent payment," : `${fraudulent} fraudulent payments,`,
    );
    expect(measured(key, fullPayment, noHistory())).toMatchObject({
      coordinates: [0, 0],
      reading: "none known",
    });
  });
});
