import { expect, test } from "vitest";
import {
  attributeFor,
  doubledTargets,
  guessTargets,
  mappingOf,
  missingFields,
  sharedNames,
} from "@/components/intake/columns";
import { fieldWords } from "@/components/intake/field-words";
import { IMPORT_FIELDS } from "@/lib/imports/fields";
import { columnFields, headerFault } from "@/lib/imports/map-row";
import { ColumnMapping } from "@/lib/imports/schema";

const guess = (...names: string[]) => guessTargets(names, IMPORT_FIELDS);

test("columns that are called like fields are those fields, in any order", () => {
  const names = IMPORT_FIELDS.map(({ name }) => name).toReversed();
  expect(guess(...names)).toEqual(names);
});

test("names are compared without case, spaces and marks, and by what others call them", () => {
  expect(
    guess("Transaction ID", "occurred_at", "AMOUNT", "Ccy", "Channel", "Customer Account", "Merchant"),
  ).toEqual(["externalId", "occurredAt", "amount", "currency", "channel", "accountId", "counterpartyId"]);
});

test("a field goes to the column with the better name, and to one only", () => {
  expect(guess("Value", "Amount", "Sum")).toEqual([null, "amount", null]);
  expect(guess("Merchant", "Merchant ID", "Merchant name")).toEqual([
    null,
    "counterpartyId",
    "counterpartyName",
  ]);
});

test("what is not recognised is left out; attributes keep their name", () => {
  expect(guess("Date of birth", "attributes.basket", "attributes.")).toEqual([
    null,
    "attributes.basket",
    null,
  ]);
});

test("columns of one name cannot be told apart and are left out", () => {
  expect(guess("amount", "amount", "currency")).toEqual([null, null, "currency"]);
  expect([...sharedNames(["amount", "", "amount", ""])]).toEqual(["amount", ""]);
});

test.each([
  ["basket", "attributes.basket"],
  ["attributes.basket", "attributes.basket"],
  ["Größe (cm)", "attributes.Größe (cm)"],
  ["", null],
  ["__proto__", null],
  ["x".repeat(65), null],
])("a column called %j can be kept as %j, and the server takes that", (name, target) => {
  expect(attributeFor(name)).toBe(target);
  if (target !== null) expect(ColumnMapping.safeParse({ [name]: target }).success).toBe(true);
});

test("required fields are missing until a column stands for them, and no field may have two", () => {
  const names = ["Ref", "Time", "Amount", "Currency", "Channel", "Account", "Place"];
  const targets = guess(...names);
  expect(missingFields(targets, IMPORT_FIELDS)).toEqual(["counterpartyId"]);
  expect(missingFields(targets.with(6, "counterpartyId"), IMPORT_FIELDS)).toEqual([]);
  expect(doubledTargets(targets.with(6, "amount"))).toEqual(["amount"]);
  expect(doubledTargets(guess("a", "b"))).toEqual([]);
});

test("a mapping that is ready here is one that the server starts with", () => {
  const names = ["Ref", "Time", "Amount", "Currency", "Channel", "Account", "Place", "Memo", ""];
  const targets = guess(...names).with(6, "counterpartyId");
  const mapping = ColumnMapping.parse(JSON.parse(JSON.stringify(mappingOf(names, targets))));
  expect(headerFault(columnFields(names, mapping))).toBeNull();
});

test("every field has words of its own", () => {
  const words = IMPORT_FIELDS.map(({ name }) => fieldWords(name));
  expect(new Set(words).size).toBe(IMPORT_FIELDS.length);
  for (const [index, { name }] of IMPORT_FIELDS.entries()) expect(words[index]).not.toBe(name);
  expect(fieldWords("attributes.basket")).toBe("Attribute basket");
});
