import type { FormulaKind, FormulaScope, FormulaValue } from "./formula-fields";

/** One part of a formula as a closure; null: not available. It reads the scope and touches nothing. */
type Step = (scope: FormulaScope) => FormulaValue | null;
/** `kind` is null for what only a payment tells: an attribute may be anything. */
export type Compiled = { kind: FormulaKind | null; step: Step };

const ARITHMETIC = {
  add: (a: number, b: number) => a + b,
  subtract: (a: number, b: number) => a - b,
  multiply: (a: number, b: number) => a * b,
  divide: (a: number, b: number) => a / b,
  pow: (a: number, b: number) => a ** b,
  // Knuth, The Art of Computer Programming 1, section 1.2.4: x mod 0 = x, else x - y floor(x / y).
  mod: (a: number, b: number) => (b === 0 ? a : a - b * Math.floor(a / b)),
} as const;

const COMPARISONS = {
  smaller: (a: number, b: number) => a < b,
  smallerEq: (a: number, b: number) => a <= b,
  larger: (a: number, b: number) => a > b,
  largerEq: (a: number, b: number) => a >= b,
} as const;

const MOST_VALUES = 20;
const one = { least: 1, most: 1 };
export const FUNCTIONS = {
  min: { least: 1, most: MOST_VALUES, of: Math.min },
  max: { least: 1, most: MOST_VALUES, of: Math.max },
  log: {
    least: 1,
    most: 2,
    of: (x: number, base?: number) => (base === undefined ? Math.log(x) : Math.log(x) / Math.log(base)),
  },
  log10: { ...one, of: Math.log10 },
  exp: { ...one, of: Math.exp },
  abs: { ...one, of: Math.abs },
  sqrt: { ...one, of: Math.sqrt },
} as const;
export type FunctionName = keyof typeof FUNCTIONS;

export const isArithmetic = (fn: string): fn is keyof typeof ARITHMETIC => Object.hasOwn(ARITHMETIC, fn);
export const isComparison = (fn: string): fn is keyof typeof COMPARISONS => Object.hasOwn(COMPARISONS, fn);

const TEXT_REFUSED = "A text can only be compared with == or != to another text";

/** Numbers as they are, yes and no as 1 and 0; a text has no number. */
function numberOf(value: FormulaValue | null): number | null {
  if (typeof value === "number") return value;
  return typeof value === "boolean" ? Number(value) : null;
}

/** An operation without a result, such as 0 / 0, leaves nothing that could still be compared. */
const defined = (value: number): number | null => (Number.isNaN(value) ? null : value);

const isText = ({ kind }: Compiled) => kind === "text";

export function constantStep(value: FormulaValue, kind: FormulaKind): Compiled {
  return { kind, step: () => value };
}

function ofTwo(
  a: Compiled,
  b: Compiled,
  kind: FormulaKind,
  result: (a: number, b: number) => FormulaValue | null,
): Compiled | string {
  if (isText(a) || isText(b)) return TEXT_REFUSED;
  return {
    kind,
    step: (scope) => {
      const left = numberOf(a.step(scope));
      if (left === null) return null;
      const right = numberOf(b.step(scope));
      return right === null ? null : result(left, right);
    },
  };
}

export function arithmeticStep(fn: keyof typeof ARITHMETIC, a: Compiled, b: Compiled): Compiled | string {
  const of = ARITHMETIC[fn];
  return ofTwo(a, b, "number", (left, right) => defined(of(left, right)));
}

export function compareStep(fn: keyof typeof COMPARISONS, a: Compiled, b: Compiled): Compiled | string {
  return ofTwo(a, b, "yes_no", COMPARISONS[fn]);
}

/** Texts with texts, and numbers with numbers; a text beside a number is a mistake in the data: not available. */
export function equalityStep(fn: "equal" | "unequal", a: Compiled, b: Compiled): Compiled | string {
  if (a.kind !== null && b.kind !== null && isText(a) !== isText(b)) return TEXT_REFUSED;
  const wanted = fn === "equal";
  return {
    kind: "yes_no",
    step: (scope) => {
      const left = a.step(scope);
      if (left === null) return null;
      const right = b.step(scope);
      if (right === null || (typeof left === "string") !== (typeof right === "string")) return null;
      const equal = typeof left === "string" ? left === right : numberOf(left) === numberOf(right);
      return equal === wanted;
    },
  };
}

/** Stops at the first value that settles it, so that what lies behind may be missing. */
export function logicStep(fn: "and" | "or", a: Compiled, b: Compiled): Compiled | string {
  if (isText(a) || isText(b)) return TEXT_REFUSED;
  const settles = fn === "or";
  return {
    kind: "yes_no",
    step: (scope) => {
      const left = numberOf(a.step(scope));
      if (left === null) return null;
      if ((left !== 0) === settles) return settles;
      const right = numberOf(b.step(scope));
      return right === null ? null : right !== 0;
    },
  };
}

export function notStep(a: Compiled): Compiled | string {
  if (isText(a)) return TEXT_REFUSED;
  return {
    kind: "yes_no",
    step: (scope) => {
      const value = numberOf(a.step(scope));
      return value === null ? null : value === 0;
    },
  };
}

export function signStep(a: Compiled, sign: 1 | -1): Compiled | string {
  if (isText(a)) return TEXT_REFUSED;
  return {
    kind: "number",
    step: (scope) => {
      const value = numberOf(a.step(scope));
      return value === null ? null : sign * value;
    },
  };
}

/** Takes the branch that the condition names and leaves the other alone. */
export function chooseStep(condition: Compiled, yes: Compiled, no: Compiled): Compiled | string {
  if (isText(condition)) return TEXT_REFUSED;
  if (yes.kind !== null && no.kind !== null && isText(yes) !== isText(no)) {
    return "Both sides of : are numbers, or both are texts";
  }
  return {
    kind: yes.kind === no.kind ? yes.kind : yes.kind === null || no.kind === null ? null : "number",
    step: (scope) => {
      const value = numberOf(condition.step(scope));
      return value === null ? null : (value !== 0 ? yes : no).step(scope);
    },
  };
}

export function callStep(name: FunctionName, args: readonly Compiled[]): Compiled | string {
  if (args.some(isText)) return TEXT_REFUSED;
  const of: (...values: number[]) => number = FUNCTIONS[name].of;
  return {
    kind: "number",
    step: (scope) => {
      const values: number[] = [];
      for (const arg of args) {
        const value = numberOf(arg.step(scope));
        if (value === null) return null;
        values.push(value);
      }
      return defined(of(...values));
    },
  };
}
