import { CATALOGUE, CATALOGUE_VERSION, DIMENSION } from "./catalogue";
import { type FormulaPayment, scopeOf } from "./formula-fields";
import { compileFormula, type Formula } from "./own-formula";
import { formulasOf } from "./signal";
import { isMissing, type SignalVector } from "./vectors";

/** An own signal as a set holds it. What it measures never changes once it has been on. */
export type OwnDefinition = {
  id: string;
  key: string;
  name: string;
  sentence: string;
  formula: string;
  /** Scaled to (value − middle) / reach, clipped to [−1, 1]. */
  middle: number;
  reach: number;
  /** Coordinate DIMENSION + position is its own for good; while it is off that coordinate is 0. */
  position: number;
  isOn: boolean;
};

/** What stands in `signal_sets`: enough to explain a score from the record alone. */
export type SetDefinition = {
  catalogueVersion: number;
  catalogue: { key: string; formulas: string[] }[];
  own: OwnDefinition[];
};

export type OwnSignal = OwnDefinition & Pick<Formula, "measure">;

/**
 * The signals that a scorer reads: the catalogue's coordinates in their places, bias included, and behind them one
 * coordinate for each own signal that has ever been on. A set never changes; every switch makes the next one.
 */
export type SignalSet = {
  version: number;
  catalogueVersion: number;
  /** Coordinates of a vector. */
  dimension: number;
  /** In the order of their coordinates; there are no gaps. */
  own: readonly OwnSignal[];
};

export function catalogueDefinition(own: OwnDefinition[] = []): SetDefinition {
  return {
    catalogueVersion: CATALOGUE_VERSION,
    catalogue: CATALOGUE.map((signal) => ({ key: signal.key, formulas: formulasOf(signal) })),
    own,
  };
}

/** @throws Error where the own signals' places have gaps */
export function signalSetOf(
  version: number,
  { catalogueVersion, own }: Omit<SetDefinition, "catalogue">,
): SignalSet {
  const inOrder = [...own].sort((a, b) => a.position - b.position);
  if (inOrder.some(({ position }, place) => position !== place)) {
    throw new Error(`The own signals of set ${version} have gaps in their places`);
  }
  return {
    version,
    catalogueVersion,
    dimension: DIMENSION + inOrder.length,
    own: inOrder.map((signal) => ({ ...signal, measure: measureOf(signal.formula) })),
  };
}

/** A formula that is refused by now, though it was taken once, measures nothing rather than stop the intake. */
function measureOf(formula: string): Formula["measure"] {
  return compileFormula(formula).formula?.measure ?? (() => null);
}

export const ownToUnit = (
  { middle, reach }: Pick<OwnDefinition, "middle" | "reach">,
  value: number,
): number => Math.max(-1, Math.min(1, (value - middle) / reach));

/**
 * A payment's vector as this set has it: the catalogue's coordinates as they are, and the own ones measured from the
 * payment. An own signal that is off or not available leaves 0.
 * @param vector of this set or another one of the same catalogue; it is not changed
 * @throws Error where it is of another catalogue
 */
export function extendVector(set: SignalSet, vector: Float64Array, payment: FormulaPayment): Float64Array {
  if (set.own.length === 0 && vector.length === set.dimension) return vector;
  return measureOwn(set, vector, payment, () => undefined);
}

/** As `extendVector`, with the marks of what is not available: an own signal's bit follows the catalogue's. */
export function extendSignals(set: SignalSet, signals: SignalVector, payment: FormulaPayment): SignalVector {
  if (set.own.length === 0) return signals;
  const marks = CATALOGUE.length + set.own.length;
  const missing = new Uint8Array(Math.ceil(marks / 8));
  const mark = (bit: number) => {
    missing[bit >> 3] = (missing[bit >> 3] as number) | (1 << (bit & 7));
  };
  for (let s = 0; s < CATALOGUE.length; s++) if (isMissing(signals.missing, s)) mark(s);
  const vector = measureOwn(set, signals.vector, payment, (position) => mark(CATALOGUE.length + position));
  return { vector, missing };
}

function measureOwn(
  set: SignalSet,
  vector: Float64Array,
  payment: FormulaPayment,
  notAvailable: (position: number) => void,
): Float64Array {
  if (vector.length < DIMENSION) throw new Error("This vector is of another catalogue");
  const extended = catalogueOf(set, vector);
  const scope = scopeOf(payment);
  for (const signal of set.own) {
    if (!signal.isOn) continue;
    const value = signal.measure(scope);
    if (value === null) notAvailable(signal.position);
    else extended[DIMENSION + signal.position] = ownToUnit(signal, value);
  }
  return extended;
}

/**
 * For where the payment is not at hand, such as the ranking of all waiting cases: own coordinates that the vector has
 * and the set still has on stay, all others are 0 until the case is scored anew.
 */
export function padVector(set: SignalSet, vector: Float64Array): Float64Array {
  if (set.own.length === 0 && vector.length === set.dimension) return vector;
  const padded = catalogueOf(set, vector);
  for (const { position, isOn } of set.own) {
    if (isOn) padded[DIMENSION + position] = vector[DIMENSION + position] ?? 0;
  }
  return padded;
}

/** The catalogue's part with zeros behind. A vector of another catalogue says nothing here: all zeros. */
function catalogueOf(set: SignalSet, vector: Float64Array): Float64Array {
  const extended = new Float64Array(set.dimension);
  if (vector.length >= DIMENSION) extended.set(vector.subarray(0, DIMENSION));
  return extended;
}
