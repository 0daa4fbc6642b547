import type {
  AccessorNode,
  ConditionalNode,
  ConstantNode,
  FunctionNode,
  IndexNode,
  MathNode,
  OperatorNode,
  ParenthesisNode,
  SymbolNode,
} from "mathjs";
import { create, parseDependencies } from "mathjs/number";
import {
  FORMULA_FIELDS,
  type FormulaFieldName,
  type FormulaKind,
  type FormulaScope,
  type FormulaValue,
} from "./formula-fields";
import {
  arithmeticStep,
  type Compiled,
  callStep,
  chooseStep,
  compareStep,
  constantStep,
  equalityStep,
  FUNCTIONS,
  type FunctionName,
  isArithmetic,
  isComparison,
  logicStep,
  notStep,
  signStep,
} from "./formula-steps";
import { type FormulaProblem, FormulaRefused, placeOf, plainText, refuse } from "./formula-text";
import { protectedAttribute } from "./protected-attributes";

/**
 * A supervisor's formula over one payment, locked down. mathjs parses and nothing else: its evaluator, whose scope,
 * functions and prototypes have been the way out of other sandboxes, is never built. What it parsed is walked once
 * against a list of what is allowed, and each allowed part becomes one closure of ours over plain values. So nothing can
 * be reached that is not written here, there are no loops or recursion to hang in, and a payment costs microseconds.
 */
export type Formula = {
  /** Fields and attributes it reads, as they are written. */
  needs: readonly string[];
  /** Null where a field it came to is missing or the result is no finite number: not available. A yes is 1, a no 0. */
  measure: (scope: FormulaScope) => number | null;
};

export type CompiledFormula =
  | { formula: Formula; problem: null }
  | { formula: null; problem: FormulaProblem };

const MOST_PARTS = 200;
const DEEPEST = 40;
const LARGEST_NUMBER = 1e15;
const ATTRIBUTE_NAME = /^[A-Za-z][A-Za-z0-9_ .-]{0,63}$/;

const KIND_OF = new Map<string, FormulaKind>(FORMULA_FIELDS.map(({ name, kind }) => [name, kind]));

let parser: ((text: string) => MathNode) | undefined;
/** Made at first use: most processes never read a formula. */
function parse(text: string): MathNode {
  parser ??= create({ ...parseDependencies }).parse as (text: string) => MathNode;
  return parser(text);
}

/** Reads and checks a formula. Never throws for what somebody wrote: that comes back as a problem with its place. */
export function compileFormula(written: string): CompiledFormula {
  try {
    const { text, outsideTexts } = plainText(written);
    const reading = new Reading(outsideTexts);
    const { kind, step } = reading.part(parsed(text), 1);
    if (kind === "text") refuse("This gives a text; a signal is a number, or a yes or no");
    return { formula: { needs: [...reading.needs], measure: (scope) => finite(step(scope)) }, problem: null };
  } catch (error) {
    if (error instanceof FormulaRefused) return { formula: null, problem: error.problem };
    throw error;
  }
}

function finite(value: FormulaValue | null): number | null {
  const number = typeof value === "boolean" ? Number(value) : value;
  return typeof number === "number" && Number.isFinite(number) ? number : null;
}

/** Senders pass numbers, texts, yes and no along; whatever else a stored attribute holds is not available. */
function plain(value: unknown): FormulaValue | null {
  return typeof value === "number" || typeof value === "boolean" || typeof value === "string" ? value : null;
}

function parsed(text: string): MathNode {
  try {
    return parse(text);
  } catch (error) {
    if (error instanceof RangeError) return refuse("This formula is too deep");
    const at = placeOfError(error);
    if (at === null) return refuse("This formula cannot be read");
    if (at >= text.trimEnd().length)
      return refuse("The formula ends too early", Math.max(0, text.length - 1));
    return refuse("The formula cannot be read from here on", at);
  }
}

/** mathjs counts characters from one. */
function placeOfError(error: unknown): number | null {
  const char = error instanceof SyntaxError && "char" in error ? error.char : null;
  return typeof char === "number" ? char - 1 : null;
}

class Reading {
  readonly needs = new Set<string>();
  private parts = 0;

  constructor(private readonly outsideTexts: string) {}

  part(node: MathNode, depth: number): Compiled {
    this.parts += 1;
    if (this.parts > MOST_PARTS) refuse(`A formula has at most ${MOST_PARTS} parts`);
    if (depth > DEEPEST) refuse("This formula is too deep");
    const of = (inner: MathNode) => this.part(inner, depth + 1);
    switch (node.type) {
      case "ParenthesisNode":
        return of((node as ParenthesisNode).content);
      case "ConstantNode":
        return this.constant((node as ConstantNode).value);
      case "SymbolNode":
        return this.field((node as SymbolNode).name);
      case "AccessorNode":
        return this.attribute(node as AccessorNode);
      case "ConditionalNode": {
        const { condition, trueExpr, falseExpr } = node as ConditionalNode;
        return this.checked(chooseStep(of(condition), of(trueExpr), of(falseExpr)), "?");
      }
      case "FunctionNode":
        return this.call(node as FunctionNode, of);
      case "OperatorNode":
        return this.operator(node as OperatorNode, of);
      default:
        return this.refuseKind(node.type);
    }
  }

  private constant(value: unknown): Compiled {
    if (typeof value === "number") {
      if (!(Math.abs(value) <= LARGEST_NUMBER)) this.refusePart("Numbers reach to 10^15 and no farther", "");
      return constantStep(value, "number");
    }
    if (typeof value === "boolean") return constantStep(value, "yes_no");
    if (typeof value === "string") return constantStep(value, "text");
    return this.refusePart(`${String(value)} is no value`, String(value));
  }

  private field(name: string): Compiled {
    const kind = KIND_OF.get(name);
    if (kind === undefined) return this.refuseName(name);
    this.needs.add(name);
    const key = name as FormulaFieldName;
    return { kind, step: (scope) => scope[key] };
  }

  private attribute(node: AccessorNode): Compiled {
    const index = node.index as IndexNode;
    const [only, ...others] = index.dimensions;
    const isOfAttributes =
      node.object.type === "SymbolNode" && (node.object as SymbolNode).name === "attributes";
    const isOptional = "optionalChaining" in node && node.optionalChaining === true;
    const name = only?.type === "ConstantNode" ? (only as ConstantNode).value : null;
    if (!isOfAttributes || isOptional || others.length > 0 || typeof name !== "string") {
      return this.refusePart('Only attributes have parts: attributes.name or attributes["name"]', ".");
    }
    const forbidden = protectedAttribute(name);
    if (forbidden) return this.refusePart(neverASignal(name, forbidden), name);
    if (!ATTRIBUTE_NAME.test(name) || name in Object.prototype) {
      return this.refusePart(`“${name}” is no name of an attribute`, name);
    }
    this.needs.add(`attributes.${name}`);
    return { kind: null, step: ({ attributes }) => plain(attributes[name]) };
  }

  private call(node: FunctionNode, of: (inner: MathNode) => Compiled): Compiled {
    // The types promise a name; the parser also gives what is called through an accessor.
    const called: MathNode = node.fn;
    const name = called.type === "SymbolNode" ? (called as SymbolNode).name : null;
    if (name === null || !Object.hasOwn(FUNCTIONS, name)) {
      return this.refusePart(`There is no function ${name ?? "of this kind"} here`, name ?? "(");
    }
    const { least, most } = FUNCTIONS[name as FunctionName];
    const count = node.args.length;
    if (count < least || count > most) {
      return this.refusePart(
        `${name} takes ${least === most ? least : `${least} to ${most}`} values, not ${count}`,
        name,
      );
    }
    return this.checked(callStep(name as FunctionName, node.args.map(of)), name);
  }

  private operator(node: OperatorNode, of: (inner: MathNode) => Compiled): Compiled {
    const { op, fn } = node as { op: string; fn: string };
    const isPercentage = "isPercentage" in node && node.isPercentage === true;
    if (isPercentage) return this.refusePart("% is the remainder of a division; write 5 % as 0.05", "%");
    if (node.implicit) return this.refusePart("Write the sign of the multiplication", "");
    const args = node.args.map(of) as [Compiled, Compiled];
    if (fn === "unaryMinus") return this.checked(signStep(args[0], -1), op);
    if (fn === "unaryPlus") return this.checked(signStep(args[0], 1), op);
    if (fn === "not") return this.checked(notStep(args[0]), op);
    if (fn === "and" || fn === "or") return this.checked(logicStep(fn, ...args), op);
    if (fn === "equal" || fn === "unequal") return this.checked(equalityStep(fn, ...args), op);
    if (isComparison(fn)) return this.checked(compareStep(fn, ...args), op);
    if (isArithmetic(fn)) return this.checked(arithmeticStep(fn, ...args), op);
    return this.refusePart(`“${op}” has no meaning in a formula`, op);
  }

  private checked(compiled: Compiled | string, part: string): Compiled {
    return typeof compiled === "string" ? this.refusePart(compiled, part) : compiled;
  }

  private refuseName(name: string): never {
    const forbidden = protectedAttribute(name);
    if (forbidden) return this.refusePart(neverASignal(name, forbidden), name);
    if (Object.hasOwn(FUNCTIONS, name)) {
      return this.refusePart(`${name} is a function: write its values in brackets behind it`, name);
    }
    return this.refusePart(`There is no field ${name}; the sender's own are attributes.${name}`, name);
  }

  private refuseKind(type: string): never {
    const words: Readonly<Record<string, [string, string]>> = {
      RelationalNode: ["Write a < b < c as a < b and b < c", "<"],
      AssignmentNode: ["A formula assigns nothing; equality is written ==", "="],
      FunctionAssignmentNode: ["A formula defines no functions", "="],
      ArrayNode: ["Lists have no meaning in a formula", "["],
      RangeNode: ["Ranges have no meaning in a formula", ":"],
    };
    const [message, part] = words[type] ?? ["This has no meaning in a formula", ""];
    return this.refusePart(message, part);
  }

  private refusePart(message: string, part: string): never {
    const at = part === "" ? null : placeOf(part, this.outsideTexts);
    return refuse(message, at, part.length);
  }
}

const neverASignal = (name: string, of: string) =>
  `${name} speaks of a person's ${of}, which is never a signal: such attributes are protected`;
