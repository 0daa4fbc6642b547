import type { Scorer } from "../scorer";
import { CATALOGUE, DIMENSION, OFFSETS } from "./catalogue";
import { coordinatesOf } from "./signal";
import type { SignalSet } from "./signal-set";

/** A signal and its coordinates in the vector: those at `from` and after, before `to`. */
export type SignalSpan = { key: string; name: string; from: number; to: number };

/** The score of a vector in which one signal says nothing. */
export type WithoutSignal = {
  key: string;
  name: string;
  /** Log-odds without the signal, in nats. */
  logit: number;
  /** How far that is from the score with it, in nats. */
  change: number;
};

export const CATALOGUE_SPANS: readonly SignalSpan[] = CATALOGUE.map((signal, s) => {
  const from = OFFSETS[s] as number;
  return { key: signal.key, name: signal.name, from, to: from + coordinatesOf(signal) };
});

/** The catalogue's signals and the team's own ones that are on. */
export function spansOf({ own }: Pick<SignalSet, "own">): SignalSpan[] {
  const ours = own.filter(({ isOn }) => isOn);
  return [
    ...CATALOGUE_SPANS,
    ...ours.map(({ key, name, position }) => {
      const from = DIMENSION + position;
      return { key, name, from, to: from + 1 };
    }),
  ];
}

/**
 * The signals that most would change a score: each in turn has all its coordinates set to 0, where a signal speaks for
 * nothing, and the whole score is taken anew, since leverage, pull and the scaling of a long vector change with it.
 * The changes do not add up to the score: signals act together. Signals that speak for nothing as it is are left out.
 * @param vector of the scorer's dimension
 * @returns at most `most`, the largest |change| first, equal ones in the order of the spans
 * @throws DimensionError, NotFiniteError
 */
export function whatWouldChange(
  scorer: Pick<Scorer, "score">,
  vector: Float64Array,
  spans: readonly SignalSpan[],
  most = 3,
): WithoutSignal[] {
  const { logit } = scorer.score(vector);
  return spans
    .filter(({ from, to }) => vector.subarray(from, to).some((coordinate) => coordinate !== 0))
    .map(({ key, name, from, to }) => {
      const without = scorer.score(vector.slice().fill(0, from, to)).logit;
      return { key, name, logit: without, change: without - logit };
    })
    .filter(({ change }) => change !== 0)
    .sort((a, b) => Math.abs(b.change) - Math.abs(a.change))
    .slice(0, most);
}
