import { expect, test } from "vitest";
import { columnFields, headerFault, rowToItem } from "@/lib/imports/map-row";

const REQUIRED = ["externalId", "occurredAt", "amount", "currency", "channel", "accountId", "counterpartyId"];

test("a header names its field unless the mapping says otherwise; null leaves a column out", () => {
  expect(columnFields(["ref", " amount ", "junk"], { ref: "externalId", junk: null })).toEqual([
    "externalId",
    "amount",
    null,
  ]);
});

test("a header that lacks a required field, or has one twice, is refused with its name", () => {
  expect(headerFault(REQUIRED)).toBeNull();
  expect(headerFault(REQUIRED.slice(1))).toBe("No column stands for externalId");
  expect(headerFault([...REQUIRED, "amount"])).toBe("Two columns stand for amount");
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
  expect(rowToItem(fields, ["T-1", "true", "0.25", "velocity; new-device", "3", "false", "x"])).toEqual({
    externalId: "T-1",
    remote: true,
    upstreamScore: 0.25,
    ruleHits: ["velocity", "new-device"],
    attributes: { basket: 3, gift: false },
  });
  expect(rowToItem(fields, ["T-2", "", "high"])).toEqual({ externalId: "T-2", upstreamScore: "high" });
});

test("an identifier with leading zeros stays text (ISO 18245 and ISO 4217 codes are text, too)", () => {
  expect(rowToItem(["externalId", "mcc"], ["000123", "0742"])).toEqual({ externalId: "000123", mcc: "0742" });
});
