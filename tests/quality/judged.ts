/** Scores and labels from pairs of outcome (1 fraudulent, 0 not) and score. */
export function judged(outcomes: readonly number[], scores: readonly number[]) {
  return {
    scores: Float64Array.from(scores),
    labels: Int8Array.from(outcomes, (outcome) => (outcome === 1 ? 1 : -1)),
  };
}
