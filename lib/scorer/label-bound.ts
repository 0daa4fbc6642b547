import { resolveOptions } from "./options";
import type { ScorerOptions } from "./types";

export interface LabelBound {
  /** No label moves the weights farther than this: Euclidean length of the step. */
  distance: number;
  /** The formula it comes from, for people: B, R, lambda, d as in the options. */
  formula: string;
}

/**
 * How far one label can move the weights m at most, whatever its vector and whichever way it goes. Every m lies in the
 * ball of radius B, so 2B holds for all; the methods' own bounds, s = x·Px ≤ R²/(2λ) and w the label's weight:
 * - `gradient`: ‖Δm‖ = η·w·σ·‖x‖ ≤ 2B·w/√t at the t-th label, and scaling back onto the ball brings no two points
 *   farther apart.
 * - `improper`: Δm = c·Px with c between w·σ and a·|tanh|, so |c| ≤ max(w, a), and ‖Px‖ ≤ √(s/(2λ)). Projected in the
 *   norm of A, in which the step is |c|·√(s(1 + hs)) long and no longer after it: times √(1 + hs), h ≤ w·κ/4.
 * - `implicit`: as above with |c| ≤ w.
 * - `newton`: with g = w·σ the step is at most g·√s/√(1 + g²s)/γ long in the norm of A, so ‖Δm‖ ≤ 1/(γ√ε).
 * - `leader`: the minimiser of a 2λ-strongly convex sum moves by at most wR/(2λ) for each label that joins it; k join
 *   at once behind the first k.
 * - `aggregate`, and where old experience is forgotten: 2B.
 * @param labels learned before this one
 * @param weight the largest weight a label has
 * @throws OptionsError
 */
export function labelBound(options: ScorerOptions, labels: number, weight = 1): LabelBound {
  const resolved = resolveOptions(options);
  const { method, weightBound, featureBound, forgetting, regularization, refitEvery } = resolved;
  const whole = 2 * weightBound;
  const within = (distance: number, formula: string): LabelBound =>
    distance < whole ? { distance, formula } : { distance: whole, formula: "2B" };
  switch (method) {
    case "gradient":
      return within((whole * weight) / Math.sqrt(labels + 1), "2B·w/√t");
    case "improper": {
      if (forgetting < 1) return { distance: whole, formula: "2B" };
      const { outcomeWeight, marginBound } = resolved;
      const step = Math.max(weight, outcomeWeight);
      const curvature = weight / (1 + outcomeWeight * marginBound);
      return within(
        step * secondOrderReach(featureBound, regularization, curvature),
        "max(w, a)·R/(2λ)·√(1 + w·κ·R²/(8λ))",
      );
    }
    case "implicit":
      if (forgetting < 1) return { distance: whole, formula: "2B" };
      return within(
        weight * secondOrderReach(featureBound, regularization, weight),
        "w·R/(2λ)·√(1 + w·R²/(8λ))",
      );
    case "newton": {
      const { curvature } = resolved;
      // The theory's constants are such that 1/(γ√ε) is 2B.
      if (curvature === "theory") return { distance: whole, formula: "2B" };
      return within(1 / (curvature * Math.sqrt(regularization)), "1/(γ√ε)");
    }
    case "leader": {
      const joining = labels < refitEvery ? 1 : refitEvery;
      return within((joining * weight * featureBound) / (2 * regularization), "k·w·R/(2λ)");
    }
    case "aggregate":
      return { distance: whole, formula: "2B" };
  }
}

/** √(s(1 + hs)/(2λ)) at the largest leverage s and curvature h = curvature/4. */
function secondOrderReach(featureBound: number, regularization: number, curvature: number): number {
  const leverage = (featureBound * featureBound) / (2 * regularization);
  return Math.sqrt((leverage * (1 + (curvature / 4) * leverage)) / (2 * regularization));
}
