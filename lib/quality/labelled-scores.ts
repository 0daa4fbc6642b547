/** Scores or probabilities, and whether each payment proved fraudulent (+1) or not (−1), in the same order. */
export function checkLabelled(scores: ArrayLike<number>, labels: ArrayLike<number>): void {
  if (scores.length !== labels.length) {
    throw new RangeError(`${scores.length} scores but ${labels.length} labels`);
  }
  for (let i = 0; i < labels.length; i++) {
    if (labels[i] !== 1 && labels[i] !== -1) throw new RangeError(`Label ${i} must be 1 or -1`);
    if (Number.isNaN(scores[i])) throw new RangeError(`Score ${i} is not a number`);
  }
}

/** As `checkLabelled`, for probabilities of fraud. */
export function checkProbabilities(p: ArrayLike<number>, labels: ArrayLike<number>): void {
  checkLabelled(p, labels);
  for (let i = 0; i < p.length; i++) {
    const one = p[i] as number;
    if (!(one >= 0 && one <= 1)) throw new RangeError(`Probability ${i} is not between 0 and 1`);
  }
}

export function countPositives(labels: ArrayLike<number>): number {
  let positives = 0;
  for (let i = 0; i < labels.length; i++) if (labels[i] === 1) positives += 1;
  return positives;
}
