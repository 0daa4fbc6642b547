import { Belief } from "./belief";
import { Certificate } from "./certificate";
import { logistic } from "./logistic";
import { posteriorLogit, pulledLogit } from "./pull";
import type { Rule, RuleLearned } from "./rule";
import { dot } from "./vector";

export interface SecondOrderSettings {
  dimension: number;
  weightBound: number;
  regularization: number;
  offset: number;
  forgetting: number;
  /** a of the pull toward even odds: 1/2 or 1 for `improper`, 0 for a rule that predicts z0. */
  outcomeWeight: number;
  /** kappa: how much of the loss's curvature p(1 - p) is believed. */
  curvature: number;
  /** Linearise at the margin after the label instead of at the prediction. */
  atPosterior: boolean;
}

/**
 * The second-order family: m and P = A⁻¹, starting at 0 and I/(2·lambda). With u = Px, s = x·u, z0 = m·x, the
 * prediction is the root of z + a·s·tanh((offset + z)/2) = z0; after the label y, with p the probability at the
 * point of linearisation z, h = w·kappa·p(1 - p), den = 1 + hs, c = (h(z - z0) + w·y·sigma(-y·logit))/den:
 *   m += c·u,  P -= (h/den)·u uᵀ.
 * - `improper` (a = 1, kappa = 1/(1 + BR)): Jézéquel, Gaillard, Rudi, "Efficient improper learning for online
 *   logistic regression", COLT 2020, arXiv 2003.08109; a = 1/2 with kappa = 1/(1 + Z/2) is our refinement.
 * - `implicit` (a = 0, kappa = 1, at the posterior): the proximal step, or online Laplace.
 * - extended Kalman filter (a = 0, kappa = 1, at the prediction): e.g. arXiv 1902.09803.
 */
export function createSecondOrder(settings: SecondOrderSettings): Rule {
  const { dimension, weightBound, regularization, offset, forgetting, outcomeWeight, curvature } = settings;
  const belief = new Belief(dimension, 1 / (2 * regularization));
  const certificate = new Certificate(regularization * weightBound * weightBound);
  const certified = outcomeWeight > 0 && forgetting === 1;
  const scratch = new Float64Array(dimension);
  const stateLength = Belief.stateLength(dimension) + Certificate.stateLength;

  function learn(x: Float64Array, label: number, weight: number): RuleLearned {
    const u = new Float64Array(dimension);
    const s = belief.direction(x, u);
    const z0 = dot(belief.mean, x);
    const target = offset + z0;
    const logit = pulledLogit(target, outcomeWeight * s);
    const at = settings.atPosterior ? posteriorLogit(target, weight * s, label) : logit;
    const p = logistic(at);
    const pOfOther = logistic(-label * at);
    const h = weight * curvature * p * (1 - p);
    const den = 1 + h * s;
    const shift = (h * (at - target) + weight * label * pOfOther) / den;
    const shrink = h / den;
    if (certified && weight === 1) certificate.add(1 - pOfOther, s, h, outcomeWeight);
    else certificate.withdraw();
    belief.move(u, shift, shrink);
    if (forgetting < 1) belief.forget(forgetting);
    const drift = belief.keepWithin(weightBound);
    if (drift) certificate.withdraw();
    return { logit, move: { u, shift, shrink, drift, exact: forgetting === 1 } };
  }

  return {
    place(x, out) {
      out[1] = belief.direction(x, scratch);
      out[0] = dot(belief.mean, x);
    },
    reading: () => ({ offset, parts: [{ outcomeWeight, share: 1, remembers: forgetting === 1 }] }),
    learn,
    weights: () => belief.mean.slice(),
    certificate: () => (certified ? certificate.value() : null),
    freeze: () => [
      {
        weights: [...belief.mean],
        triangle: outcomeWeight > 0 ? [...belief.triangle] : null,
        outcomeWeight,
        share: 1,
      },
    ],
    state() {
      const state = new Float64Array(stateLength);
      belief.write(state, 0);
      certificate.write(state, stateLength - Certificate.stateLength);
      return state;
    },
    restore(state) {
      if (state.length !== stateLength) return false;
      belief.read(state, 0);
      certificate.read(state, stateLength - Certificate.stateLength);
      return true;
    },
  };
}
