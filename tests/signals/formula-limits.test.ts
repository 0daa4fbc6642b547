import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { scopeOf } from "@/lib/signals/formula-fields";
import { compileFormula } from "@/lib/signals/own-formula";
import { examplePayment, formulaOf, measure } from "./formula-payment";

describe("whatever is written", () => {
  const PIECES = [
    ..."()[]{}.,;:?=!<>+-*/%^&|~'\"\\#@$ \n_1a",
    ...[
      "amount",
      "attributes",
      "constructor",
      "__proto__",
      "currency",
      "log",
      "max",
      "and",
      "or",
      "not",
      "true",
    ],
    ...[
      "==",
      "!=",
      "<=",
      "0.5",
      "1e15",
      '"EUR"',
      "attributes.x",
      'attributes["x"]',
      "eval",
      "end",
      "to",
      "in",
    ],
  ];
  const scope = scopeOf(examplePayment);
  const soup = fc
    .array(fc.oneof(fc.constantFrom(...PIECES), fc.string({ maxLength: 3, unit: "binary" })), {
      maxLength: 40,
    })
    .map((pieces) => pieces.join(""));

  it("is refused with a message or measures a finite number or nothing, and never throws", () => {
    fc.assert(
      fc.property(soup, (text) => {
        const { formula, problem } = compileFormula(text);
        if (!formula) {
          expect(problem.message).not.toBe("");
          if (problem.at !== null) expect(problem.at).toBeLessThanOrEqual(text.length);
          return;
        }
        const value = formula.measure(scope);
        expect(value === null || Number.isFinite(value)).toBe(true);
      }),
      { numRuns: 5_000 },
    );
  });
});

describe("size is limited before anything is read at length", () => {
  const many = (part: string, times: number) => part.repeat(times);
  it.each([
    ["a megabyte of text", `"${many("x", 1_000_000)}" == currency`],
    ["a megabyte of sums", `1${many("+1", 500_000)}`],
    ["a megabyte of brackets", many("(", 1_000_000)],
    ["a megabyte of spaces", many(" ", 1_000_000)],
    ["a text as long as the formula may be", `"${many("x", 900)}" == currency`],
    ["brackets too deep", `${many("(", 300)}1${many(")", 300)}`],
    ["calls too deep", `${many("abs(", 100)}1${many(")", 100)}`],
    ["signs too deep", `${many("-", 900)}1`],
    ["denials too deep", `${many("not ", 240)}1`],
    ["powers too deep", `2${many("^2", 400)}`],
    ["choices too deep", `${many("1?1:", 240)}1`],
    ["too many parts", `1${many("+1", 300)}`],
    ["too many values", `max(${many("1,", 60)}1)`],
    ["brackets without an end", many("(", 20)],
    ["a comparison of comparisons", many("1<", 300)],
    ["accessors without an end", `attributes${many(".a", 300)}`],
    ["digits without an end", many("9", 900)],
  ])("%s", (_, text) => {
    expect(compileFormula(text).formula).toBeNull();
  });

  it("takes what lies within", () => {
    expect(measure(`1${many("+1", 30)}`)).toBe(31);
    expect(measure(`${many("(", 20)}7${many(")", 20)}`)).toBe(7);
  });
});

describe("what is allowed cannot hang or escape when a payment is measured", () => {
  it("towers of powers end at once, as not available", () => {
    expect(measure("9^9^9^9^9^9^9^9")).toBeNull();
    expect(measure("exp(exp(exp(exp(exp(amount)))))")).toBeNull();
    expect(measure("(1e15)^(1e15)")).toBeNull();
    expect(measure("2^-(1e15)")).toBe(0);
  });

  it("an attribute that bears the name of something built in is only what was sent", () => {
    const attributes = JSON.parse('{"__proto__": {"loyalty_years": 9}, "constructor": 5, "x": 1}');
    const payment = { ...examplePayment, attributes };
    expect(measure("attributes.loyalty_years", payment)).toBeNull();
    expect(measure("attributes.x", payment)).toBe(1);
    expect(Object.getPrototypeOf(scopeOf(payment).attributes)).toBeNull();
    expect(Object.getPrototypeOf(scopeOf(payment))).toBeNull();
  });

  it("values of unheard-of kinds are not available", () => {
    const attributes = JSON.parse('{"a": {"valueOf": 1}, "b": [1], "c": null}');
    const payment = { ...examplePayment, attributes };
    for (const name of ["a", "b", "c"]) {
      expect(measure(`attributes.${name}`, payment)).toBeNull();
      expect(measure(`attributes.${name} + 1`, payment)).toBeNull();
      expect(measure(`attributes.${name} == 1 ? 1 : 0`, payment)).toBeNull();
      expect(measure(`not attributes.${name}`, payment)).toBeNull();
    }
  });

  it("measuring changes neither the payment nor what it is asked again", () => {
    const payment = Object.freeze({
      ...examplePayment,
      attributes: Object.freeze({ ...examplePayment.attributes }),
    });
    const formula = formulaOf("max(amount, attributes.loyalty_years) * 2");
    const scope = scopeOf(payment);
    expect(formula.measure(scope)).toBe(formula.measure(scope));
  });
});
