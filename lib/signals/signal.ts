import type { Facts } from "./facts";
import { type Hinge, hingeScale, type Scale } from "./scale";

/** One measure of a signal and the coordinates it fills: first its scale, then its hinges in order. */
export type Part = {
  /** What v stands for in the formulas. */
  measure: string;
  value: (facts: Facts) => number | null;
  scales: readonly [Scale, ...Scale[]];
};

export type Signal = {
  key: string;
  name: string;
  /** What it measures and why it tells, in one sentence for reviewers. */
  sentence: string;
  /** Fields of a transaction without which it is not available. */
  needs: readonly string[];
  parts: readonly Part[];
  /** What was measured, in words; `measured` has one number per part, read back from the stored coordinates. */
  reading: (measured: readonly number[]) => string;
};

export function part(
  measure: string,
  value: (facts: Facts) => number | null,
  scale: Scale,
  hinges: readonly Hinge[] = [],
): Part {
  return { measure, value, scales: [scale, ...hinges.map(hingeScale)] };
}

export const coordinatesOf = (signal: Signal): number =>
  signal.parts.reduce((count, { scales }) => count + scales.length, 0);

/** The formula of every coordinate, for the documentation. */
export const formulasOf = (signal: Signal): string[] =>
  signal.parts.flatMap(({ measure, scales }) => scales.map(({ formula }) => `${formula}, v = ${measure}`));

/** Whole numbers as such, others to two significant places, for readings. */
export function roughly(value: number): string {
  if (!Number.isFinite(value)) return "none";
  if (Math.abs(value) >= 100)
    return new Intl.NumberFormat("en-GB").format(Math.round(value)).replaceAll(",", "\u202f");
  return String(Number(value.toPrecision(2)));
}

export const plural = (count: number, one: string, many = `${one}s`): string =>
  `${roughly(Math.round(count))} ${Math.round(count) === 1 ? one : many}`;
