import { expect, test } from "vitest";
import { IMPORT_FIELDS } from "@/lib/imports/fields";
import { columnFields, headerFault, rowToItem } from "@/lib/imports/map-row";
import { ColumnMapping } from "@/lib/imports/schema";

const REQUIRED = ["externalId", "occurredAt", "amount", "currency", "channel", "accountId", "counterpartyId"];

test("the required fields are those that the API requires", () => {
  expect(IMPORT_FIELDS.filter(({ required }) => required).map(({ name }) => name)).toEqual(REQUIRED);
});

test("a header names its field unless the mapping says otherwise; null leaves a column out", () => {
  expect(columnFields(["ref", " amount ", "junk"], { ref: "externalId", junk: null })).toEqual([
    "externalId",
    "amount",
    null,
  ]);
});

test.each(["constructor", "toString", "__proto__", ""])(
  "a header called %j is a name like any other",
  (name) => {
    expect(columnFields([name], {})).toEqual([name]);
    expect(headerFault([...REQUIRED, name])).toMatch(/^Column 8 is no field of a payment/);
  },
);

test("a header that lacks a required field, or has one twice, is refused with its name", () => {
  expect(headerFault(REQUIRED)).toBeNull();
  expect(headerFault([...REQUIRED, "attributes.basket", null, null])).toBeNull();
  expect(headerFault(REQUIRED.slice(2))).toBe("No column stands for externalId, occurredAt");
  expect(headerFault([...REQUIRED, "amount"])).toBe("Two columns stand for amount");
});

test("columns that are not ours are told by their place, since they may hold somebody's data", () => {
  const fault = headerFault([...REQUIRED, "4111 1111 1111 1111"]);
  expect(fault).toMatch(/^Column 8 /);
  expect(fault).not.toContain("4111");
});

test.each([
  ["amount", true],
  ["attributes.basket", true],
  ["attributes.", false],
  ["attributes.__proto__", false],
  ["attributes", false],
  [`attributes.${"x".repeat(65)}`, false],
  ["colour", false],
] as const)("a column may be mapped to %s: %s", (field, allowed) => {
  expect(ColumnMapping.safeParse({ header: field }).success).toBe(allowed);
});

test("cells become typed fields, empty cells none, and what does not fit its type stays text", () => {
  const fields = [
    "externalId",
    "remote",
    "upstreamScore",
    "ruleHits",
    "attributes.basket",
    "attributes.gift",
    null,
  ];
  expect(rowToItem(fields, ["T-1", "TRUE", "0.25", "velocity; new-device", "3", "false", "x"])).toEqual({
    externalId: "T-1",
    remote: true,
    upstreamScore: 0.25,
    ruleHits: ["velocity", "new-device"],
    attributes: { basket: 3, gift: false },
  });
  expect(rowToItem(fields, ["T-2", "", "high"])).toEqual({ externalId: "T-2", upstreamScore: "high" });
  expect(rowToItem(fields, ["T-3", "maybe", "1.5e-07"])).toEqual({
    externalId: "T-3",
    remote: "maybe",
    upstreamScore: 1.5e-7,
  });
});

test("an identifier with leading zeros stays text (ISO 18245 and ISO 4217 codes are text, too)", () => {
  expect(rowToItem(["externalId", "mcc"], ["000123", "0742"])).toEqual({ externalId: "000123", mcc: "0742" });
  expect(rowToItem(["attributes.branch", "attributes.code"], ["0042", "12e3"])).toEqual({
    attributes: { branch: "0042", code: "12e3" },
  });
});
