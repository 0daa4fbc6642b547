import { Belief } from "./belief";
import { OptionsError } from "./errors";
import { logistic } from "./logistic";
import type { ResolvedOptions } from "./options";
import type { Rule, RuleLearned } from "./rule";
import { dot } from "./vector";

/**
 * Online Newton step (Hazan, Agarwal, Kale, "Logarithmic regret algorithms for online convex optimization", 2007):
 * with g = -w·y·sigma(-y·logit)·x, A += g gᵀ (A starts at epsilon·I), m -= A⁻¹g/gamma, then m is projected onto
 * ‖m‖ ≤ B in the norm of A. It predicts m·x itself.
 *
 * Constants, by the option `curvature`:
 * - a number is gamma, with epsilon = `regularization`: 0.5 and 1 do well in practice and carry no guarantee;
 * - `theory` is the proof's gamma = min(1/(4GD), alpha)/2, epsilon = 1/(gamma·D)², with G = R, D = 2B and
 *   alpha = e^(-BR - |offset|), the exp-concavity of the loss over the ball: a guarantee, but useless once BR is large.
 * Live certificate (`theory`, unit weights): gamma·epsilon·B²/2 + Σ g·A⁻¹g / (2·gamma), from the same proof.
 */
export function createNewton(options: ResolvedOptions): Rule {
  const { dimension, weightBound, offset } = options;
  const { gamma, epsilon } = constantsOf(options);
  const belief = new Belief(dimension, 1 / epsilon);
  const scratch = new Float64Array(dimension);
  const certified = options.curvature === "theory";
  const stateLength = Belief.stateLength(dimension) + 2;
  let bound = (gamma * epsilon * weightBound * weightBound) / 2;
  let unitWeights = true;

  function learn(x: Float64Array, label: number, weight: number): RuleLearned {
    const u = new Float64Array(dimension);
    const s = belief.direction(x, u);
    const logit = offset + dot(belief.mean, x);
    const pull = weight * logistic(-label * logit);
    const shrink = (pull * pull) / (1 + pull * pull * s);
    const shift = (label * pull) / (1 + pull * pull * s) / gamma;
    bound += (shrink * s) / (2 * gamma);
    if (weight !== 1) unitWeights = false;
    belief.move(u, shift, shrink);
    const drift = belief.keepWithin(weightBound);
    return { logit, move: { u, shift, shrink, drift, exact: true } };
  }

  return {
    place(x, out) {
      out[1] = belief.direction(x, scratch);
      out[0] = dot(belief.mean, x);
    },
    reading: () => ({ offset, parts: [{ outcomeWeight: 0, share: 1, remembers: true }] }),
    learn,
    weights: () => belief.mean.slice(),
    certificate: () => (certified && unitWeights ? bound : null),
    freeze: () => [{ weights: [...belief.mean], triangle: null, outcomeWeight: 0, share: 1 }],
    state() {
      const state = new Float64Array(stateLength);
      belief.write(state, 0);
      state[stateLength - 2] = bound;
      state[stateLength - 1] = unitWeights ? 1 : 0;
      return state;
    },
    restore(state) {
      if (state.length !== stateLength) return false;
      belief.read(state, 0);
      bound = state[stateLength - 2] as number;
      unitWeights = state[stateLength - 1] === 1;
      return true;
    },
  };
}

function constantsOf(options: ResolvedOptions): { gamma: number; epsilon: number } {
  const { curvature, regularization, weightBound, featureBound, offset } = options;
  if (curvature !== "theory") return { gamma: curvature, epsilon: regularization };
  const diameter = 2 * weightBound;
  const concavity = Math.exp(-weightBound * featureBound - Math.abs(offset));
  const gamma = Math.min(1 / (4 * featureBound * diameter), concavity) / 2;
  const epsilon = 1 / (gamma * diameter) ** 2;
  if (!Number.isFinite(epsilon)) {
    throw new OptionsError("curvature: the theory's constants leave the range of a double at these bounds");
  }
  return { gamma, epsilon };
}
