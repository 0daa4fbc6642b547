import { precisionOverGroups, tieGroupsOf } from "./tie-groups";

/**
 * Average precision, Σ (R_k − R_{k−1})·P_k over the distinct scores from the highest down: payments with equal scores
 * count together, as if drawn at random among themselves, and nothing is interpolated. This is the definition of
 * scikit-learn's `average_precision_score`.
 * @param labels 1 fraudulent, -1 legitimate
 * @returns null without a fraud
 * @throws RangeError for unequal lengths, labels other than ±1 and scores that are not numbers
 */
export function averagePrecision(scores: Float64Array, labels: Int8Array): number | null {
  return precisionOverGroups(tieGroupsOf(scores, labels));
}
