/**
 * Cost of each decision under each truth, in any one unit. First word: what is done with the payment;
 * second: what it is.
 */
export type CostMatrix = {
  /** A fraudulent payment is let go: the loss. */
  passFraudulent: number;
  /** A legitimate payment is let go. */
  passLegitimate: number;
  /** A fraudulent payment is stopped. */
  stopFraudulent: number;
  /** A legitimate payment is stopped: the false positive. */
  stopLegitimate: number;
};

/** In either truth the wrong decision costs more than the right one (Elkan 2001, "reasonableness"). */
export function isReasonable(cost: CostMatrix): boolean {
  return cost.stopLegitimate > cost.passLegitimate && cost.passFraudulent > cost.stopFraudulent;
}

/**
 * The probability of fraud from which stopping costs less than letting go:
 * p* = (c10 − c00) / (c10 − c00 + c01 − c11), decision first, truth second, 1 = fraud.
 * Source: Elkan, "The foundations of cost-sensitive learning", IJCAI 2001, equation 2.
 * @returns a probability in (0, 1); null where the matrix is not reasonable, since no such point exists then
 */
export function costMinimalProbability(cost: CostMatrix): number | null {
  if (!isReasonable(cost)) return null;
  const falsePositive = cost.stopLegitimate - cost.passLegitimate;
  return falsePositive / (falsePositive + cost.passFraudulent - cost.stopFraudulent);
}

/** What a policy's terms say of one payment of this amount, in minor units of the base currency. */
export function costsOf(
  terms: { falsePositiveCostMinor: number; lossGivenFraud: number },
  amountMinor: number,
): CostMatrix {
  return {
    passFraudulent: amountMinor * terms.lossGivenFraud,
    passLegitimate: 0,
    stopFraudulent: 0,
    stopLegitimate: terms.falsePositiveCostMinor,
  };
}
