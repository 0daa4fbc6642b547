import { checkProbabilities } from "./labelled-scores";
import { twoSidedP } from "./normal";

/**
 * Spiegelhalter's z: whether the Brier score is what the probabilities themselves promise,
 * Σ(y − p)(1 − 2p) / √Σ(1 − 2p)²p(1 − p) with y 1 or 0 (Statistics in Medicine 5, 1986, 421–433). Positive: worse
 * than promised. p is two-sided.
 * @param labels 1 fraudulent, -1 legitimate
 * @returns null where the probabilities promise no variance: none at all, or each of them 0, ½ or 1
 * @throws RangeError for unequal lengths, labels other than ±1 and p outside [0, 1]
 */
export function spiegelhalter(p: Float64Array, labels: Int8Array): { z: number; p: number } | null {
  checkProbabilities(p, labels);
  let excess = 0;
  let variance = 0;
  for (let i = 0; i < p.length; i++) {
    const one = p[i] as number;
    const slope = 1 - 2 * one;
    excess += ((labels[i] === 1 ? 1 : 0) - one) * slope;
    variance += slope * slope * one * (1 - one);
  }
  if (!(variance > 0)) return null;
  const z = excess / Math.sqrt(variance);
  return { z, p: twoSidedP(z) };
}
