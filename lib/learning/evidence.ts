import type { Scorer } from "../scorer";

/** Evidence of one score as it is kept with a decision: doubles in nats, in this order. */
export type Evidence = {
  /** One per coordinate of the vector. */
  contributions: Float64Array;
  /** Log-odds of the base rate. */
  offset: number;
  /** What is held back for lack of experience with vectors like this. */
  pull: number;
  logit: number;
};

/** offset + Σ contributions + pull = logit. @throws DimensionError, NotFiniteError */
export function evidenceOf(scorer: Scorer, vector: Float64Array): Evidence {
  const { contributions, offset, pull, logit } = scorer.explain(vector);
  return { contributions, offset, pull, logit };
}

export function packEvidence(evidence: Evidence): Float64Array {
  const { contributions, offset, pull, logit } = evidence;
  const packed = new Float64Array(contributions.length + 3);
  packed.set(contributions);
  packed.set([offset, pull, logit], contributions.length);
  return packed;
}

export function unpackEvidence(packed: Float64Array): Evidence {
  const [offset = 0, pull = 0, logit = 0] = packed.subarray(-3);
  return { contributions: packed.slice(0, -3), offset, pull, logit };
}
