import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { scopeOf } from "@/lib/signals/formula-fields";
import { compileFormula } from "@/lib/signals/own-formula";
import { examplePayment, formulaOf, measure } from "./formula-payment";

/** Ways out of formula sandboxes that have worked elsewhere, and some of our own. Each must be refused when read. */
const REFUSED = [
  // Reaching constructors and prototypes.
  "constructor",
  "__proto__",
  "prototype",
  "toString",
  "attributes.constructor",
  "attributes.__proto__",
  'attributes["__proto__"]',
  'attributes["constructor"]',
  'attributes["toString"]',
  'attributes["hasOwnProperty"]',
  "attributes.valueOf()",
  "attributes.constructor.constructor",
  'attributes.constructor("return process")()',
  '"".constructor',
  '("a").constructor.constructor("return this")()',
  "log.constructor",
  'log.constructor("return process.env")()',
  "max.apply(1, attributes)",
  'min["call"](1)',
  "amount.constructor",
  "(amount).toFixed",
  "attributes.a.b",
  "attributes.a.b.c(3)",
  'attributes["a"]["b"]',
  "attributes[1]",
  "attributes[amount]",
  'attributes["a", "b"]',
  'attributes["a" + "b"]',
  'attributes[concat("__pro", "to__")]',
  "attributes?.x",
  "attributes",
  "attributes == attributes",
  // Functions and objects of the library.
  'cellFunc("x")',
  "import({log: 1})",
  'import("x", 1)',
  'createUnit("knot")',
  'eval("1")',
  'evaluate("1")',
  'parse("1 + 1")',
  'compile("1")',
  "parser()",
  "chain(3)",
  'simplify("x")',
  'rationalize("x")',
  'derivative("x^2", "x")',
  'resolve("x", 1)',
  "help(log)",
  'help("log")',
  "typed(1)",
  "config(1)",
  "reviver()",
  "map(1, log)",
  "filter(1, log)",
  "forEach(1, log)",
  "sparse(1)",
  "matrix(1)",
  "zeros(100000, 100000)",
  "ones(1e9)",
  "range(1, 1e12)",
  "sum(1, 2)",
  "random()",
  "randomInt(3)",
  "factorial(170)",
  "gamma(171)",
  "combinations(1000, 500)",
  "bignumber(1)",
  "fraction(1, 3)",
  "complex(1, 2)",
  "unit(5)",
  'print("$x", 1)',
  "format(1)",
  "string(1)",
  "number(1)",
  "print(1)",
  "isNaN(1)",
  "typeOf(1)",
  "Function(1)",
  "process",
  "globalThis",
  "require",
  "this",
  "self",
  "window",
  "undefined",
  "null",
  "NaN > 1",
  "Infinity",
  "i",
  "pi",
  "e",
  "end",
  "amount end",
  // Assignment, definition, several statements and comments.
  "a = 1",
  "amount = 3",
  "attributes.x = 3",
  'attributes["x"] = 3',
  "f(x) = x",
  "f(x) = f(x)",
  "max(x) = 1",
  "amount; amount",
  "amount\n= 3",
  "amount\namount",
  "1, 2",
  "amount # comment",
  "amount // comment",
  "amount /* comment */",
  "(a = 3) + amount",
  "amount == (b = 2)",
  "max(c = 1, 2)",
  // Objects, lists, ranges, indexing, units, other operators.
  "{}",
  "{a: 1}",
  '{"constructor": 1}.constructor',
  "[1, 2]",
  "[1, 2][1]",
  "[]",
  "1:10",
  "1:10:100",
  "amount[1]",
  '"abc"[1]',
  "5 cm",
  "5 cm to m",
  "amount to m",
  "amount in m",
  "amount'",
  "amount!",
  "170!",
  "170!!!!!!",
  "~amount",
  "amount & 1",
  "amount | 1",
  "amount << 1",
  "1 << 30",
  "amount >> 1",
  "amount >>> 1",
  "amount .* 2",
  "amount ./ 2",
  "amount .^ 2",
  "amount xor 1",
  "amount mod",
  "amount ?? 1",
  "amount |> log",
  "2 amount",
  "amount(2)",
  "(amount)(2)",
  "log(2)(3)",
  "2 (3)",
  "amount amount",
  "0xfffffffffffffffffffff",
  "1i",
  "3i + 2",
  "1e400",
  "1e16",
  "-1e300",
  "50%",
  // Disguises.
  "amоunt",
  "ａｍｏｕｎｔ",
  "amount\u200b",
  "\u202eamount",
  "\ufeffamount",
  "\\u0061mount",
  "amount\u0000",
  "amount\u2028+1",
  "`amount`",
  "'EUR' == currency",
  '"a\\"b" == currency',
  '"\\x41" == currency',
  '"\u0000" == currency',
  ["$", "{amount}"].join(""),
  "$amount",
  "@amount",
  "⁠amount",
  "x⃗",
  "𝒙",
  "2²",
  "√4",
  "∞",
  "amount ≤ 3",
];

describe("what is not on the list is refused when read", () => {
  it.each(REFUSED)("%s", (text) => {
    const { formula, problem } = compileFormula(text);
    expect(formula).toBeNull();
    expect(problem?.message.length).toBeGreaterThan(5);
  });

  it("leaves the built-in prototypes as they were", () => {
    const before = [Object, Array, String, Number, Function].map((of) =>
      Object.getOwnPropertyNames(of.prototype).join(),
    );
    for (const text of REFUSED) compileFormula(text);
    const after = [Object, Array, String, Number, Function].map((of) =>
      Object.getOwnPropertyNames(of.prototype).join(),
    );
    expect(after).toEqual(before);
  });
});

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
