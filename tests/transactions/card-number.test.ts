import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { findCardNumbers, holdsCardNumber, passesLuhn } from "@/lib/transactions/card-number";

// Test numbers that card schemes and payment processors publish for trials, as found in public test suites (Apache
// Commons Validator among them); the check itself is Luhn's formula of ISO/IEC 7812-1, Annex B.
const VALID = [
  "4111111111111111",
  "4012888888881881",
  "4222222222222",
  "5555555555554444",
  "5105105105105100",
  "378282246310005",
  "371449635398431",
  "6011111111111117",
  "6011000990139424",
  "30569309025904",
  "38520000023237",
];
const INVALID = [
  "4111111111111112",
  "4222222222229",
  "378282246310001",
  "5105105105105105",
  "6011000990139421",
  "30569309025901",
];

describe("Luhn's check", () => {
  it.each([...VALID, "49927398716", "79927398713", "1234567812345670"])("passes %s", (digits) => {
    expect(passesLuhn(digits)).toBe(true);
  });

  it.each([...INVALID, "49927398717", "1234567812345678", "79927398710"])("fails %s", (digits) => {
    expect(passesLuhn(digits)).toBe(false);
  });

  it("notices every single wrong digit", () => {
    fc.assert(
      fc.property(fc.constantFrom(...VALID), fc.nat(18), fc.integer({ min: 1, max: 9 }), (number, at, by) => {
        const place = at % number.length;
        const wrong = String((Number(number[place]) + by) % 10);
        expect(passesLuhn(number.slice(0, place) + wrong + number.slice(place + 1))).toBe(false);
      }),
    );
  });
});

describe("a card number", () => {
  it.each(VALID)("is seen in %s, bare, grouped, inside other text and as a number", (number) => {
    const grouped = number.replace(/(\d{4})(?=\d)/g, "$1 ");
    for (const text of [
      number,
      grouped,
      grouped.replaceAll(" ", "-"),
      grouped.replaceAll(" ", "\u00a0"),
      grouped.replaceAll(" ", " - "),
      `paid with ${number}, thanks`,
      `PAN${number}x`,
      `12 ${grouped} 99`,
      number.replace(/\d/g, (digit) => String.fromCharCode(0xff10 + Number(digit))),
    ]) {
      expect(holdsCardNumber(text), text).toBe(true);
    }
    expect(holdsCardNumber(Number(number))).toBe(true);
  });

  it.each(INVALID)("is not seen in %s, which fails the check", (number) => {
    expect(holdsCardNumber(number)).toBe(false);
    expect(holdsCardNumber(Number(number))).toBe(false);
  });

  it.each([
    ["1234567812345670", "passes Luhn, but no card begins with 1"],
    ["49927398716", "is too short"],
    ["00004111111111111111111", "is too long"],
    ["411111111111.1111", "is a decimal number"],
    ["0.4111111111111111", "is a decimal number"],
    ["41111111-1111-4111-8111-111111111111", "is a UUID"],
    ["2026-03-01T09:30:00.123456789Z", "is a time"],
    ["4111/1111/1111/1111", "is set apart by slashes"],
  ])("is not seen in %s, which %s", (text) => {
    expect(holdsCardNumber(text)).toBe(false);
  });

  it("is not seen in measurements", () => {
    expect(holdsCardNumber(0.4111111111111111)).toBe(false);
    expect(holdsCardNumber(-4111111111111.5)).toBe(false);
  });

  it("is found in any field, key or list, and only its place is told", () => {
    const number = "4111111111111111";
    const places = (item: unknown, ...exempt: string[]) => findCardNumbers(item, new Set(exempt));
    expect(places({ counterpartyName: `x ${number}` })).toEqual(["counterpartyName"]);
    expect(places({ attributes: { note: number, [number]: 1 } })).toEqual(["attributes.note", "attributes"]);
    expect(places({ attributes: { code: Number(number) } })).toEqual(["attributes.code"]);
    expect(places({ ruleHits: ["a", number] })).toEqual(["ruleHits.1"]);
    expect(places({ unknown: { [number]: { deep: 1 } } })).toEqual(["unknown"]);
    expect(places({ [number]: "x" })).toEqual([""]);
    expect(places(number)).toEqual([""]);
    expect(places({ externalId: number, note: "fine" })).toEqual(["externalId"]);
  });

  it("may stand in an exempt identifier field, and nowhere else", () => {
    const item = { externalId: "4111111111111111", counterpartyName: "4111111111111111" };
    expect(findCardNumbers(item, new Set(["externalId"]))).toEqual(["counterpartyName"]);
    expect(findCardNumbers({ attributes: { externalId: item.externalId } }, new Set(["externalId"]))).toEqual(
      ["attributes.externalId"],
    );
  });

  it("is no reason to fall over items nested without end", () => {
    let nested: unknown = "4111111111111111";
    for (let i = 0; i < 50_000; i++) nested = [nested];
    expect(findCardNumbers({ attributes: nested }, new Set())).toEqual([]);
  });
});
