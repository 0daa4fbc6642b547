import type { Move, Reading, ScorecardPart } from "./types";

/** What a rule made of one label: the log odds it gave before, and the step it took. */
export interface RuleLearned {
  logit: number;
  /** The step without what the scorer adds to it. */
  move: Move & { parts?: readonly Move[] };
}

/**
 * The common inside of every method. Vectors come checked and within the feature bound.
 * A rule's places of a vector are z0 and s of each of its parts in turn.
 */
export interface Rule {
  place(x: Float64Array, out: Float64Array): void;
  reading(): Reading;
  learn(x: Float64Array, label: number, weight: number): RuleLearned;
  weights(): Float64Array;
  certificate(): number | null;
  /** The present state as plain parts of a scorecard. */
  freeze(): ScorecardPart[];
  /** Mean of the weights as they stood before each label; only where scores are linear in the vector. */
  averagedWeights?(): Float64Array;
  /** Everything that changes, as doubles; `restore` takes the same array back. */
  state(): Float64Array;
  /** Returns false, without changing anything, when the length cannot be this rule's. */
  restore(state: Float64Array): boolean;
}
