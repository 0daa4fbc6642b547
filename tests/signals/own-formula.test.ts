import fc from "fast-check";
import { all, create } from "mathjs/number";
import { describe, expect, it } from "vitest";
import { FORMULA_FIELDS } from "@/lib/signals/formula-fields";
import { compileFormula } from "@/lib/signals/own-formula";
import { examplePayment, formulaOf, measure } from "./formula-payment";

describe("a formula", () => {
  it.each([
    ["amount", 123.45],
    ["amount > 100", 1],
    ["not (amount > 100)", 0],
    ["hour >= 18 and hour < 19 or weekday == 1", 1],
    ['currency == "EUR" ? 2 : 3', 2],
    ["counterpartyCountry != accountCountry", 1],
    ["accountAgeDays", 10],
    ["ruleHits × 2 − 1", 3],
    ["ruleHits ÷ 4", 0.5],
    ["2 ^ 3 ^ 2", 512],
    ["-2 ^ 2", -4],
    ["17 % 5", 2],
    ["-17 % 5", 3],
    ["min(3, amount, 2) + max(1, 2)", 4],
    ["log(8, 2) + log10(1000) + exp(0) + sqrt(16) + abs(-1)", 12],
    ["attributes.loyalty_years / 2", 2],
    ['attributes["basket size"]', 3],
    ['attributes.tier == "gold"', 1],
    ["attributes.verified + hasCard + hasDevice", 2],
    ["hour", 18.5],
    ["weekday", 3],
    ["remote == true", 1],
    ["(hour >= 18 or hour < 5)\n\t and amount > 100\r\n  ? 2\n  : 3", 2],
  ])("%s is %d", (text, value) => {
    expect(measure(text)).toBeCloseTo(value, 12);
  });

  it.each([
    ["attributes.unheard_of"],
    ["attributes.tier"],
    ["attributes.tier + 1"],
    ["attributes.tier == 3"],
    ["1 / 0"],
    ["0 / 0"],
    ["0 / 0 > 1"],
    ["log(0 - 1) > 1 ? 1 : 0"],
    ["sqrt(-1)"],
    ["exp(1000)"],
    ["10 ^ 15 ^ 15"],
    ["log(-1)"],
  ])("%s is not available", (text) => {
    expect(measure(text)).toBeNull();
  });

  it("is not available where a field is missing that it comes to, and is where it does not come to it", () => {
    const bare = {
      ...examplePayment,
      upstreamScore: null,
      amountBaseMinor: null,
      remote: null,
      attributes: null,
    };
    expect(measure("upstreamScore > 0.5", bare)).toBeNull();
    expect(measure("remote", bare)).toBeNull();
    expect(measure("attributes.loyalty_years", bare)).toBeNull();
    expect(measure("ruleHits > 1 or amount > 5", bare)).toBe(1);
    expect(measure("ruleHits > 5 and amount > 5", bare)).toBe(0);
    expect(measure('channel == "cash_withdrawal" ? amount : 7', bare)).toBe(7);
  });

  it("says which fields it reads", () => {
    expect(formulaOf("amount > 3 and attributes.loyalty_years < 2 and amount < 9").needs).toEqual([
      "amount",
      "attributes.loyalty_years",
    ]);
  });

  it("can read every documented field", () => {
    for (const { name, kind } of FORMULA_FIELDS) {
      expect(compileFormula(kind === "text" ? `${name} == "x"` : name).problem).toBeNull();
    }
  });
});

describe("a mistake is named with its place", () => {
  it.each([
    ["amuont > 3", "There is no field amuont", 0],
    ["1 + amuont", "There is no field amuont", 4],
    ["amount +", "too early", 7],
    ["amount + * 2", "cannot be read from here", 9],
    ["(amount", "too early", 6],
    ["amount >\n  amuont", "There is no field amuont", 11],
    ["amount = 3", "assigns nothing", 7],
    ["currency + 1", "text can only be compared", 9],
    ['amount == "EUR"', "text can only be compared", 7],
    ["currency", "This gives a text", null],
    ["log", "is a function", 0],
    ["sin(1)", "no function sin", 0],
    ["abs(1, 2)", "takes 1 values", 0],
    ["2 amount", "sign of the multiplication", null],
    ["5%", "remainder", 1],
    ["1 < amount < 5", "and b < c", 2],
    ['"EUR', "no end", 0],
    ["amount # note", "has no meaning", 7],
    ["", "Write a formula", 0],
    ['channel == "a" ? "x" : 1', "Both sides", 15],
  ])("%s", (text, message, at) => {
    const { problem } = compileFormula(text);
    expect(problem?.message).toContain(message);
    expect(problem?.at).toBe(at);
  });
});

describe("protected attributes are refused", () => {
  it.each([
    "age",
    "AGE",
    "attributes.age",
    "attributes.customer_age",
    "attributes.customerAge",
    "attributes.age_band",
    'attributes["holder age"]',
    "attributes.sex",
    "attributes.gender",
    "attributes.ethnicity",
    "attributes.ethnic_group",
    "attributes.race",
    "attributes.religion",
    "attributes.health_status",
    "attributes.disability",
    "attributes.isDisabled",
    "attributes.nationality",
    "attributes.payerNationality",
    "attributes.citizenship",
    "attributes.dob",
    "attributes.date_of_birth",
    "attributes.birthYear",
    "attributes.pregnant",
    "attributes.sexual_orientation",
    "attributes.maritalStatus",
    "attributes.trade_union",
    "attributes.customernationality",
  ])("%s", (text) => {
    expect(compileFormula(`${text} > 1`).problem?.message).toMatch(/never a signal/);
  });

  it.each([
    "attributes.account_age",
    "attributes.deviceAgeDays",
    "attributes.average_basket",
    "accountAgeDays",
  ])("%s is no person's", (text) => {
    expect(compileFormula(text).problem).toBeNull();
  });
});

/** A formula as a tree, to be written as text and reckoned by two readers. */
type Tree = { text: string; parts: Tree[] };
const leaf = (text: string): Tree => ({ text, parts: [] });

const tree = fc.letrec<{ tree: Tree }>((tie) => {
  const two = (op: string) =>
    fc
      .tuple(tie("tree"), tie("tree"))
      .map(([a, b]): Tree => ({ text: `(${a.text} ${op} ${b.text})`, parts: [a, b] }));
  const call = (name: string) => tie("tree").map((a): Tree => ({ text: `${name}(${a.text})`, parts: [a] }));
  return {
    tree: fc.oneof(
      { maxDepth: 5, depthSize: "small" },
      fc.constantFrom("amount", "ruleHits", "hour", "upstreamScore", "attributes.loyalty_years").map(leaf),
      fc.double({ min: 0, max: 1e6, noNaN: true }).map((value) => leaf(String(value))),
      fc.constantFrom("0", "1", "2", "0.5", "true", "false").map(leaf),
      ...["+", "-", "*", "/", "%", "^", "<", "<=", ">", ">=", "==", "!=", "and", "or"].map(two),
      ...["log", "log10", "exp", "abs", "sqrt", "not ", "-", "+"].map(call),
      fc
        .tuple(tie("tree"), tie("tree"))
        .map(([a, b]): Tree => ({ text: `max(${a.text}, min(${b.text}, ${a.text}))`, parts: [a, b] })),
      fc
        .tuple(tie("tree"), tie("tree"), tie("tree"))
        .map(([a, b, c]): Tree => ({ text: `(${a.text} ? ${b.text} : ${c.text})`, parts: [a, b, c] })),
    ),
  };
}).tree;

describe("agreement with mathjs's own evaluator", () => {
  // It compares within a tolerance, and lets NaN compare; ours compares exactly and ends at NaN.
  const mathjs = create({ ...all }, { relTol: 1e-300, absTol: 0 });
  const scope = () => ({
    amount: 123.45,
    ruleHits: 2,
    hour: 18.5,
    upstreamScore: 0.75,
    attributes: { loyalty_years: 4 },
  });
  const evaluate = (text: string): number => Number(mathjs.evaluate(text, scope()));
  const hasNaN = ({ text, parts }: Tree): boolean => Number.isNaN(evaluate(text)) || parts.some(hasNaN);

  it("holds for random formulas", () => {
    let compared = 0;
    fc.assert(
      fc.property(tree, (formula) => {
        const compiled = compileFormula(formula.text);
        // Size is limited; that is checked elsewhere.
        fc.pre(compiled.formula !== null);
        fc.pre(!hasNaN(formula));
        const expected = evaluate(formula.text);
        const value = measure(formula.text);
        if (!Number.isFinite(expected)) expect(value).toBeNull();
        else expect(value).toBe(expected);
        compared += 1;
      }),
      { numRuns: 1_500 },
    );
    expect(compared).toBeGreaterThan(1_000);
  });
});
