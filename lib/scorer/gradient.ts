import { projectOntoBall } from "./ball";
import { logistic } from "./logistic";
import type { ResolvedOptions } from "./options";
import type { Rule, RuleLearned } from "./rule";
import { dot, lengthOf } from "./vector";

/**
 * Projected online gradient descent (Zinkevich, "Online convex programming and generalized infinitesimal gradient
 * ascent", 2003): m += eta·w·y·sigma(-y·logit)·x, then m is scaled back onto ‖m‖ ≤ B. The step of the t-th label is
 * eta = D/(G·√t) with D = 2B, the diameter, and G = R, the largest gradient. It predicts m·x itself, in O(d).
 * Live certificate (unit weights), from the same proof: D·G·√t/2 + Σ eta·‖g‖²/2, at most 1.5·D·G·√t.
 */
export function createGradient(options: ResolvedOptions): Rule {
  const { dimension, weightBound, featureBound, offset } = options;
  const mean = new Float64Array(dimension);
  const diameter = 2 * weightBound;
  const stateLength = dimension + 3;
  let labels = 0;
  let steps = 0;
  let unitWeights = true;

  function learn(x: Float64Array, label: number, weight: number): RuleLearned {
    labels += 1;
    const logit = offset + dot(mean, x);
    const pull = weight * logistic(-label * logit);
    const rate = diameter / (featureBound * Math.sqrt(labels));
    const shift = rate * label * pull;
    steps += (rate / 2) * pull * pull * dot(x, x);
    if (weight !== 1) unitWeights = false;
    for (let i = 0; i < dimension; i++) mean[i] = (mean[i] as number) + shift * (x[i] as number);
    const drift = keepWithin(mean, weightBound);
    return { logit, move: { u: x.slice(), shift, shrink: 0, drift, exact: true } };
  }

  return {
    place(x, out) {
      out[0] = dot(mean, x);
      out[1] = 0;
    },
    reading: () => ({ offset, parts: [{ outcomeWeight: 0, share: 1, remembers: true }] }),
    learn,
    weights: () => mean.slice(),
    certificate: () => (unitWeights ? (diameter * featureBound * Math.sqrt(labels)) / 2 + steps : null),
    freeze: () => [{ weights: [...mean], triangle: null, outcomeWeight: 0, share: 1 }],
    state: () => Float64Array.of(...mean, labels, steps, unitWeights ? 1 : 0),
    restore(state) {
      if (state.length !== stateLength) return false;
      mean.set(state.subarray(0, dimension));
      labels = state[dimension] as number;
      steps = state[dimension + 1] as number;
      unitWeights = state[dimension + 2] === 1;
      return true;
    },
  };
}

/** Scales the weights back onto the ball; returns by how much they moved, null when they were within. */
function keepWithin(mean: Float64Array, bound: number): Float64Array | null {
  if (lengthOf(mean) <= bound) return null;
  const before = mean.slice();
  projectOntoBall(mean, bound);
  return before.map((value, i) => (mean[i] as number) - value);
}
