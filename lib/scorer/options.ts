import { OptionsError } from "./errors";
import { METHODS, type Method, type ScorerOptions } from "./types";

export type ResolvedOptions = Readonly<Required<ScorerOptions>>;

const DEFAULT_REGULARIZATION: Record<Method, number> = {
  improper: 0.5,
  implicit: 0.5,
  newton: 1,
  leader: 0.1,
  // These two have none of their own.
  gradient: 0,
  aggregate: 0,
};

/** Options that only some methods have; given to another method they are refused, not ignored. */
const OWNERS: Partial<Record<Exclude<keyof ScorerOptions, "dimension">, readonly Method[]>> = {
  marginBound: ["improper"],
  outcomeWeight: ["improper"],
  regularization: ["improper", "implicit", "newton", "leader"],
  forgetting: ["improper", "implicit"],
  linearization: ["implicit"],
  curvature: ["newton"],
  refitEvery: ["leader"],
};

function require(holds: boolean, key: keyof ScorerOptions, wanted: string, value: unknown): void {
  if (!holds) throw new OptionsError(`${key} must be ${wanted}, got ${String(value)}`);
}

/** Within these ranges no state can leave the range of a double. */
function requirePositive(key: keyof ScorerOptions, value: number): void {
  require(value >= 1e-9 && value <= 1e9, key, "between 1e-9 and 1e9", value);
}

/** Fills in the defaults. Errors: OptionsError naming the option that is out of range or not this method's. */
export function resolveOptions(given: ScorerOptions): ResolvedOptions {
  const method = given.method ?? "improper";
  require(METHODS.includes(method), "method", `one of ${METHODS.join(", ")}`, method);
  for (const [key, value] of Object.entries(given)) {
    if (value !== undefined && !has(method, key))
      throw new OptionsError(`${key} is not an option of ${method}`);
  }
  const weightBound = given.weightBound ?? 16;
  const featureBound = given.featureBound ?? 4;
  const outcomeWeight = given.outcomeWeight ?? 0.5;
  const resolved: ResolvedOptions = {
    dimension: given.dimension,
    method,
    weightBound,
    featureBound,
    marginBound: given.marginBound ?? (outcomeWeight === 1 ? weightBound * featureBound : 6),
    regularization: given.regularization ?? DEFAULT_REGULARIZATION[method],
    outcomeWeight,
    offset: given.offset ?? 0,
    forgetting: given.forgetting ?? 1,
    linearization: given.linearization ?? "posterior",
    curvature: given.curvature ?? 0.5,
    refitEvery: given.refitEvery ?? 50,
  };
  checkOptions(resolved);
  return resolved;
}

/** The options that this method has, so that they can be given to another scorer of it. */
export function ownOptions(options: ResolvedOptions): Readonly<ScorerOptions> {
  const own: ScorerOptions = { ...options };
  for (const key of Object.keys(OWNERS) as (keyof typeof OWNERS)[]) {
    if (!has(options.method, key)) delete own[key];
  }
  return own;
}

function has(method: Method, key: string): boolean {
  return OWNERS[key as keyof typeof OWNERS]?.includes(method) ?? true;
}

/** Errors: OptionsError naming the option that is out of range. */
export function checkOptions(options: ResolvedOptions): void {
  const { dimension, outcomeWeight, offset, forgetting, linearization, curvature, refitEvery } = options;
  require(Number.isInteger(dimension) &&
    dimension > 0 &&
    dimension <= 4096, "dimension", "a whole number from 1 to 4096", dimension);
  requirePositive("weightBound", options.weightBound);
  requirePositive("featureBound", options.featureBound);
  requirePositive("marginBound", options.marginBound);
  if (has(options.method, "regularization")) requirePositive("regularization", options.regularization);
  require(outcomeWeight === 0.5 || outcomeWeight === 1, "outcomeWeight", "0.5 or 1", outcomeWeight);
  require(Math.abs(offset) <= 1000, "offset", "between -1000 and 1000", offset);
  require(forgetting > 0 && forgetting <= 1, "forgetting", "above 0 and at most 1", forgetting);
  require(linearization === "posterior" ||
    linearization === "prior", "linearization", "posterior or prior", linearization);
  if (curvature !== "theory") requirePositive("curvature", curvature);
  require(Number.isInteger(refitEvery) &&
    refitEvery > 0, "refitEvery", "a positive whole number", refitEvery);
}
