import { describe, expect, it } from "vitest";
import { readItem } from "@/lib/transactions/read-item";

const NOW = new Date("2026-03-02T09:00:00.000Z");
const item = {
  externalId: "P-1",
  occurredAt: "2026-03-02T08:59:00Z",
  amount: "129.90",
  currency: "EUR",
  channel: "card_remote",
  accountId: "A-1",
  counterpartyId: "S-1",
};
const read = (change: object, exempt: string[] = []) =>
  readItem({ ...item, ...change }, NOW, new Set(exempt));
const errorsOf = (change: object, exempt?: string[]) => {
  const result = read(change, exempt);
  return "errors" in result ? result.errors : [];
};
const paymentOf = (change: object, exempt?: string[]) => {
  const result = read(change, exempt);
  if ("errors" in result) throw new Error(JSON.stringify(result.errors));
  return result.payment;
};
const without = (field: string) => ({ [field]: undefined });

describe("a sound item", () => {
  it("needs no more than who, whom, when, how and how much", () => {
    expect(paymentOf({})).toMatchObject({
      externalId: "P-1",
      occurredAt: new Date("2026-03-02T08:59:00Z"),
      amountMinor: 12_990,
      direction: "outgoing",
      deviceId: null,
      ruleHits: null,
    });
  });

  it("may have every field", () => {
    const full = {
      direction: "incoming",
      remote: false,
      counterpartyName: "Bäckerei Ost",
      cardRef: "tok_1",
      deviceId: "d1",
      ipAddress: "2001:db8::1",
      mcc: "0742",
      counterpartyCountry: "FR",
      accountCountry: "DE",
      authentication: "exempt",
      accountOpenedAt: "2019-03-02T00:00:00+01:00",
      upstreamScore: 0.5,
      ruleHits: ["R1"],
      attributes: { batch: 7, note: "x", flagged: true },
    };
    expect(paymentOf(full)).toMatchObject({ ...full, accountOpenedAt: new Date("2019-03-01T23:00:00Z") });
  });

  it.each([
    ["EUR", "129.9", 12_990],
    ["EUR", "0", 0],
    ["JPY", "500", 500],
    ["KWD", "1.234", 1_234],
    ["EUR", "90071992547409.91", Number.MAX_SAFE_INTEGER],
  ])("in %s of %s is %d minor units", (currency, amount, minor) => {
    expect(paymentOf({ currency, amount }).amountMinor).toBe(minor);
  });

  it("may lie up to a day ahead", () => {
    expect(errorsOf({ occurredAt: "2026-03-03T09:00:00Z" })).toEqual([]);
  });

  it("has the same content however it was written, and other content where anything differs", () => {
    const hash = (change: object) => paymentOf(change).contentHash.toString("hex");
    expect(hash({ amount: "129.9", occurredAt: "2026-03-02T09:59:00+01:00" })).toBe(hash({}));
    expect(hash({ direction: "outgoing" })).toBe(hash({}));
    expect(hash({ attributes: { a: 1, b: 2 } })).toBe(hash({ attributes: { b: 2, a: 1 } }));
    const others = [
      { amount: "129.91" },
      { deviceId: "d" },
      { cardRef: "d" },
      { attributes: {} },
      { ruleHits: [] },
    ];
    expect(new Set([{}, ...others].map(hash)).size).toBe(others.length + 1);
  });
});

describe("a bad item", () => {
  it.each([
    [without("externalId"), "externalId", "is required"],
    [without("amount"), "amount", "is required"],
    [{ externalId: "" }, "externalId", "must not be empty"],
    [{ externalId: "x".repeat(65) }, "externalId", "has more than 64 characters"],
    [{ externalId: 5 }, "externalId", "must be text"],
    [{ accountId: "a\u0000b" }, "accountId", "holds control characters or broken text"],
    [{ accountId: "a\ud800" }, "accountId", "holds control characters or broken text"],
    [{ amount: 129.9 }, "amount", 'must be a decimal number as text, such as "129.90"'],
    [{ amount: "-1.00" }, "amount", 'is not a decimal number of 0 or more, such as "129.90"'],
    [{ amount: "1e3" }, "amount", 'is not a decimal number of 0 or more, such as "129.90"'],
    [{ amount: "1,50" }, "amount", 'is not a decimal number of 0 or more, such as "129.90"'],
    [{ amount: "1.234" }, "amount", "has more decimal places than EUR, which has 2"],
    [{ amount: "1.5", currency: "JPY" }, "amount", "has more decimal places than JPY, which has 0"],
    [{ amount: "10000000000000000" }, "amount", "is larger than 2^53 − 1 minor units"],
    [{ amount: "90071992547409.92" }, "amount", "is larger than 2^53 − 1 minor units"],
    [{ currency: "EUX" }, "currency", "is not a currency of ISO 4217 that has a minor unit"],
    [{ currency: "XAU" }, "currency", "is not a currency of ISO 4217 that has a minor unit"],
    [{ currency: "eur" }, "currency", "is not a currency of ISO 4217 that has a minor unit"],
    [{ occurredAt: "yesterday" }, "occurredAt", "is not a time of RFC 3339, such as 2026-03-01T09:30:00Z"],
    [{ occurredAt: "2026-03-03T09:00:01Z" }, "occurredAt", "lies more than 24 h in the future"],
    [{ occurredAt: "0001-01-01T00:00:00Z" }, "occurredAt", "lies before the year 1900"],
    [{ accountOpenedAt: "2030-01-01T00:00:00Z" }, "accountOpenedAt", "lies more than 24 h in the future"],
    [{ channel: "pigeon" }, "channel", /^must be one of card_present, /],
    [{ direction: "sideways" }, "direction", "must be one of outgoing, incoming"],
    [{ remote: "yes" }, "remote", "must be true or false"],
    [{ ipAddress: "300.1.1.1" }, "ipAddress", "must be an IPv4 or IPv6 address"],
    [{ mcc: 742 }, "mcc", "must be four digits as text"],
    [{ mcc: "742" }, "mcc", "must be four digits as text, such as 0742"],
    [
      { counterpartyCountry: "UK" },
      "counterpartyCountry",
      "is not a country code of ISO 3166-1 alpha-2, such as FR",
    ],
    [{ accountCountry: "EU" }, "accountCountry", "is not a country code of ISO 3166-1 alpha-2, such as FR"],
    [{ accountCountry: "XK" }, "accountCountry", "is not a country code of ISO 3166-1 alpha-2, such as FR"],
    [{ upstreamScore: 1.01 }, "upstreamScore", "must lie between 0 and 1"],
    [{ upstreamScore: "0.5" }, "upstreamScore", "must be a number"],
    [{ ruleHits: "R1" }, "ruleHits", "must be a list of texts"],
    [{ ruleHits: Array(21).fill("R") }, "ruleHits", "has more than 20 entries"],
    [{ attributes: { a: { b: 1 } } }, "attributes.a", /^must be text of at most 200 characters/],
    [
      { attributes: Object.fromEntries(Array.from({ length: 51 }, (_, i) => [`k${i}`, i])) },
      "attributes",
      "has more than 50 entries",
    ],
    [{ amout: "1" }, "amout", "is not a known field"],
  ])("%j names its field", (change, path, message) => {
    expect(errorsOf(change)).toEqual([
      { path, message: typeof message === "string" ? message : expect.stringMatching(message) },
    ]);
  });

  it("names all its faults at once", () => {
    const paths = errorsOf({ amount: 1, channel: "x", mcc: "1", extra: 1 }).map(({ path }) => path);
    expect(paths.toSorted()).toEqual(["amount", "channel", "extra", "mcc"]);
    expect(errorsOf({ amount: "1.999", occurredAt: "x" }).map(({ path }) => path)).toEqual([
      "amount",
      "occurredAt",
    ]);
  });

  it.each([null, "text", 7, [], undefined])("that is %j is no object", (raw) => {
    const result = readItem(raw, NOW, new Set());
    expect("errors" in result && result.errors.length).toBeGreaterThan(0);
  });

  it("with a card number says where, and the number is nowhere in the answer", () => {
    const number = "4111 1111 1111 1111";
    for (const change of [
      { counterpartyName: `Card ${number}` },
      { externalId: number },
      { accountId: number.replaceAll(" ", "") },
      { attributes: { [number]: "x" } },
      { attributes: { pan: Number(number.replaceAll(" ", "")) } },
      { ruleHits: [number] },
      { [number]: "unknown field" },
      { nested: { more: number } },
    ]) {
      const result = read(change);
      expect("errors" in result && result.errors[0]?.message).toMatch(/payment card number/);
      expect(JSON.stringify(result).replace(/\D/g, "")).not.toContain("4111");
    }
  });

  it("may hold such a number in an identifier field that is exempt", () => {
    expect(paymentOf({ externalId: "4111111111111111" }, ["externalId"]).externalId).toBe("4111111111111111");
    expect(errorsOf({ cardRef: "4111111111111111" }, ["externalId"])[0]?.path).toBe("cardRef");
  });
});
