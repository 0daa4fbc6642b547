export const METHODS = ["improper", "newton", "gradient", "implicit", "leader", "aggregate"] as const;
export type Method = (typeof METHODS)[number];

/** 1 = fraudulent, -1 = legitimate. */
export type Label = 1 | -1;

export interface ScorerOptions {
  /** Length d of every vector. */
  dimension: number;
  /** Default `improper`. */
  method?: Method;
  /** B: the weights never get longer than this. Default 16. */
  weightBound?: number;
  /** R: a longer vector is scaled down to this length. Default 4. */
  featureBound?: number;
  /** Z: the largest margin competed with; sets the curvature. Default 6, or B·R when `outcomeWeight` is 1. `improper` only. */
  marginBound?: number;
  /** lambda. Default 0.5; 0.1 for `leader`; for `newton` the starting curvature epsilon, default 1. */
  regularization?: number;
  /** a: how much both outcomes of the case at hand weigh: 1/2 (default) or 1 (the published rule). `improper` only. */
  outcomeWeight?: number;
  /** o: the log odds an untrained scorer starts from. Default 0. */
  offset?: number;
  /** rho in (0, 1]: how much old experience still counts after each label. Default 1. `improper` and `implicit` only. */
  forgetting?: number;
  /** Where `implicit` linearises the loss: at the margin after the label (default), or before it (extended Kalman filter). */
  linearization?: "posterior" | "prior";
  /** gamma of `newton`: a number (default 0.5, good in practice) or `theory` (the constants of the proof). */
  curvature?: number | "theory";
  /** k of `leader`: refit after every so many labels. Default 50. */
  refitEvery?: number;
}

export interface Score {
  /** Log odds of fraud: offset + raw evidence + pull. */
  logit: number;
  /** In (0, 1), both ends excluded. */
  probability: number;
  /** s = x·Px: how little experience there is in this direction. 0 for `gradient`. */
  leverage: number;
  /** z0 = m·x, before the pull and without the offset. */
  rawEvidence: number;
  /** What is held back because experience is short; 0 for rules that hold nothing back. */
  pull: number;
  offset: number;
  /** True when the vector was longer than the feature bound and was scaled down to it. */
  scaled: boolean;
}

export interface Explanation extends Score {
  /** Per coordinate, in nats; offset + their sum + pull = logit. */
  contributions: Float64Array;
}

/** How one part moved: with v = x·u a waiting case moves by z0 += shift·v + x·drift and s -= shrink·v². */
export interface Move {
  /** u = P x as it was before the label. */
  u: Float64Array;
  shift: number;
  shrink: number;
  /** What the projection onto the weight bound added to the weights; null when none was needed. */
  drift: Float64Array | null;
  /** False when the leverages moved in another way (forgetting, refit): waiting cases must be recomputed. */
  exact: boolean;
}

/** What one label did, as plain data, so that a waiting case moves in O(d). */
export interface Step extends Move {
  /** Number of labels learned once this step is taken. */
  index: number;
  /** How scores are read once this step is taken. */
  reading: Reading;
  /** `aggregate` only: one move per expert; the step's own u is then empty. */
  parts?: readonly Move[];
}

/** How the places of one part are read. A part is one linear scorer; `aggregate` has several. */
export interface PartReading {
  /** a of the pull toward even odds; 0 when the rule predicts z0 itself. */
  outcomeWeight: number;
  /** Weight of this part in the mixture of probabilities; the shares add up to 1. */
  share: number;
  /** False when old experience is forgotten, so that its leverage is not told. */
  remembers: boolean;
}

/** All that is needed to read a score from places; plain data. */
export interface Reading {
  offset: number;
  parts: readonly PartReading[];
}

/** A vector within the feature bound, and its z0 and s for each part in turn. */
export interface Placed {
  vector: Float64Array;
  places: Float64Array;
}

export interface Learned {
  /** Log-loss in nats of the score given before learning, unweighted. */
  loss: number;
  /** That score's log odds. */
  logit: number;
  step: Step;
}

export interface ScorecardPart {
  weights: number[];
  /** P row by row up to the diagonal, for the leverage; null where nothing is held back. */
  triangle: number[] | null;
  outcomeWeight: number;
  share: number;
}

/** A frozen scorer as plain JSON, for a payment system that scores on its own. */
export interface Scorecard {
  /** `averaged`: the mean of the weights over all labels; `latest`: the state after the last label. */
  kind: "averaged" | "latest";
  /** What is promised for its scores, in words. */
  guarantee: string;
  /** The live certificate at the time, in nats. */
  certificate: number | null;
  labels: number;
  featureBound: number;
  offset: number;
  parts: ScorecardPart[];
}

export interface Scorer {
  readonly method: Method;
  readonly dimension: number;
  /** How many labels have been learned. */
  readonly labels: number;
  /** Options with every default filled in. */
  readonly options: Readonly<ScorerOptions>;
  /** Errors: DimensionError, NotFiniteError. */
  score(x: Float64Array): Score;
  explain(x: Float64Array): Explanation;
  /**
   * Errors: DimensionError, NotFiniteError, LabelError; each leaves the scorer as it was.
   * @param weight multiplies the loss of this label; from 0 to 1e6.
   */
  learn(x: Float64Array, label: Label, weight?: number): Learned;
  /** Where a vector stands, for `createWaiting`. Errors: DimensionError, NotFiniteError. */
  place(x: Float64Array): Placed;
  reading(): Reading;
  /** A copy of the weights (for `aggregate`: the mean by share). */
  weights(): Float64Array;
  /** Upper bound on the regret so far in nats, or null where none holds (see the rule's file). */
  certificate(): number | null;
  /** Freezes the scorer by online-to-batch conversion; see `scorecard.ts` for the guarantees. */
  scorecard(): Scorecard;
  snapshot(): Uint8Array;
}
