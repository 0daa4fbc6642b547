import { factorise, invert } from "./cholesky";
import { type FitProblem, fitInBall, modelAt } from "./hindsight";
import type { ResolvedOptions } from "./options";
import type { Rule, RuleLearned } from "./rule";
import { multiply, scaledIdentity, triangleLength } from "./triangle";
import { dot } from "./vector";

/**
 * Follow the regularised leader: after every k labels, m becomes the minimiser of Σ w·log(1 + e^(-y·logit)) +
 * lambda·‖θ‖² over ‖θ‖ ≤ B, by Newton from where it stood. It predicts m·x itself. P is the inverse Hessian there.
 * It keeps every vector, and a refit passes over all of them, so it serves as a line to compare with, not for years
 * of labels. No certificate.
 */
export function createLeader(options: ResolvedOptions): Rule {
  const { dimension, weightBound, regularization, offset, refitEvery } = options;
  const vectors: Float64Array[] = [];
  const labels: number[] = [];
  const sampleWeights: number[] = [];
  const mean = new Float64Array(dimension);
  const triangle = scaledIdentity(dimension, 1 / (2 * regularization));
  const scratch = new Float64Array(dimension);
  const fixedLength = dimension + triangleLength(dimension);
  const rowLength = dimension + 2;

  function refit(): void {
    const problem: FitProblem = {
      vectors,
      labels,
      sampleWeights,
      weightBound,
      regularization,
      offset,
      start: mean,
    };
    mean.set(fitInBall(problem).weights);
    const { hessian } = modelAt(problem, mean);
    if (factorise(hessian, dimension)) invert(hessian, triangle, dimension);
  }

  function learn(x: Float64Array, label: number, weight: number): RuleLearned {
    const logit = offset + dot(mean, x);
    vectors.push(x.slice());
    labels.push(label);
    sampleWeights.push(weight);
    const due = labels.length < refitEvery || labels.length % refitEvery === 0;
    if (due) refit();
    return { logit, move: { u: new Float64Array(dimension), shift: 0, shrink: 0, drift: null, exact: !due } };
  }

  return {
    place(x, out) {
      multiply(triangle, x, scratch);
      out[1] = Math.max(0, dot(x, scratch));
      out[0] = dot(mean, x);
    },
    reading: () => ({ offset, parts: [{ outcomeWeight: 0, share: 1, remembers: true }] }),
    learn,
    weights: () => mean.slice(),
    certificate: () => null,
    freeze: () => [{ weights: [...mean], triangle: null, outcomeWeight: 0, share: 1 }],
    state() {
      const state = new Float64Array(fixedLength + rowLength * vectors.length);
      state.set(mean);
      state.set(triangle, dimension);
      vectors.forEach((x, n) => {
        const at = fixedLength + rowLength * n;
        state.set(x, at);
        state[at + dimension] = labels[n] as number;
        state[at + dimension + 1] = sampleWeights[n] as number;
      });
      return state;
    },
    restore(state) {
      if (state.length < fixedLength || (state.length - fixedLength) % rowLength !== 0) return false;
      mean.set(state.subarray(0, dimension));
      triangle.set(state.subarray(dimension, fixedLength));
      for (let at = fixedLength; at < state.length; at += rowLength) {
        vectors.push(state.slice(at, at + dimension));
        labels.push(state[at + dimension] as number);
        sampleWeights.push(state[at + dimension + 1] as number);
      }
      return true;
    },
  };
}
