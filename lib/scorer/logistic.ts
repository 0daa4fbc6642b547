/** Probabilities are clamped to [2^-1074, 1 - 2^-53], so that none is 0 or 1; log odds and losses are not. */
const LARGEST_PROBABILITY = 1 - 2 ** -53;

/** sigma(z) without overflow; may round to 0 or 1 far out. */
export function logistic(z: number): number {
  if (z >= 0) return 1 / (1 + Math.exp(-z));
  const e = Math.exp(z);
  return e / (1 + e);
}

/** The probability to show for log odds z: strictly between 0 and 1. */
export function probabilityOf(z: number): number {
  const p = logistic(z);
  if (p <= 0) return Number.MIN_VALUE;
  return Math.min(p, LARGEST_PROBABILITY);
}

/** log(1 + e^(-yz)) in nats, exact to rounding for any finite z. */
export function logLoss(z: number, label: number): number {
  const margin = label * z;
  return margin >= 0 ? Math.log1p(Math.exp(-margin)) : -margin + Math.log1p(Math.exp(margin));
}
