import { projectOntoBall } from "./ball";
import { minimiseInBall } from "./ball-quadratic";
import { DimensionError, LabelError, OptionsError } from "./errors";
import { logistic, logLoss } from "./logistic";
import { addOuter, addToDiagonal, multiply, triangleLength } from "./triangle";
import type { Label } from "./types";
import { checkVector, dot } from "./vector";

/** Multiplications between two pauses: a few milliseconds. */
const WORK_BETWEEN_PAUSES = 1e6;

/** Predicted decrease, as a part of the loss, below which full Newton steps are taken unchecked. */
const CLOSE = 1e-9;

export interface Fit {
  weights: Float64Array;
  /** Σ w·log(1 + e^(-y(offset + θ·x))) + lambda·‖θ‖², in nats. */
  loss: number;
}

export interface FitProblem {
  vectors: readonly Float64Array[];
  labels: ArrayLike<number>;
  /** One per label; all 1 when left out. */
  sampleWeights?: ArrayLike<number>;
  weightBound: number;
  regularization: number;
  offset: number;
  /** Where to start from, within the bound; default 0. */
  start?: Float64Array;
}

/**
 * The best fixed weights with ‖θ‖ ≤ weightBound for these labels, and their loss: what regret is measured against.
 * Exact to rounding; a huge bound gives the ordinary maximum-likelihood fit. Vectors longer than a scorer's feature
 * bound should be given as the scorer saw them (`place(x).vector`). Errors: DimensionError, NotFiniteError,
 * LabelError, OptionsError.
 */
export function bestInHindsight(
  vectors: readonly Float64Array[],
  labels: ArrayLike<Label>,
  weightBound: number,
  offset = 0,
): Fit {
  return atOnce(bestInHindsightInSteps(vectors, labels, weightBound, offset));
}

/**
 * As `bestInHindsight`, pausing every few milliseconds of work, so that whoever drives it can let others have their
 * turn. How it is driven changes nothing of the result.
 * @param start weights within the bound to begin from, such as those of a shorter log; default 0
 */
export function* bestInHindsightInSteps(
  vectors: readonly Float64Array[],
  labels: ArrayLike<Label>,
  weightBound: number,
  offset = 0,
  start?: Float64Array,
): Generator<void, Fit> {
  if (vectors.length === 0) throw new DimensionError("hindsight needs at least one vector");
  if (labels.length !== vectors.length) {
    throw new DimensionError(`${vectors.length} vectors but ${labels.length} labels`);
  }
  if (!(Number.isFinite(weightBound) && weightBound > 0))
    throw new OptionsError("weightBound must be positive");
  if (!Number.isFinite(offset)) throw new OptionsError("offset must be finite");
  const { length } = vectors[0] as Float64Array;
  for (const x of vectors) checkVector(x, length);
  if (start) checkVector(start, length);
  for (let i = 0; i < labels.length; i++) {
    if (Math.abs(labels[i] as number) !== 1) throw new LabelError(`label ${i} must be 1 or -1`);
  }
  return yield* fitInSteps({ vectors, labels, weightBound, regularization: 0, offset, start });
}

function atOnce<T>(steps: Generator<void, T>): T {
  for (;;) {
    const step = steps.next();
    if (step.done) return step.value;
  }
}

/**
 * Newton's method over the ball: each round minimises the second-order model within the ball exactly and searches
 * along the line to that point, which stays inside since the ball is convex.
 */
export function fitInBall(problem: FitProblem): Fit {
  return atOnce(fitInSteps(problem));
}

function* fitInSteps(problem: FitProblem): Generator<void, Fit> {
  const dimension = (problem.vectors[0] as Float64Array).length;
  let weights: Float64Array = problem.start?.slice() ?? new Float64Array(dimension);
  let loss = yield* lossAt(problem, weights);
  let lastDecrease = Number.POSITIVE_INFINITY;
  for (let round = 0; round < 200; round++) {
    const { gradient, hessian } = yield* modelInSteps(problem, weights);
    const b = new Float64Array(dimension);
    multiply(hessian, weights, b);
    for (let i = 0; i < dimension; i++) b[i] = (b[i] as number) - (gradient[i] as number);
    const target = minimiseInBall(hessian, b, problem.weightBound);
    for (let i = 0; i < dimension; i++) target[i] = (target[i] as number) - (weights[i] as number);
    const decrease = -dot(gradient, target);
    if (!(decrease > 0)) break;
    if (decrease > CLOSE * loss) {
      const next = yield* searchLine(problem, weights, target, loss, decrease);
      if (next === null) break;
      weights = next.weights;
      loss = next.loss;
    } else {
      // Newton now squares the error each round, while differences of the loss drown in rounding: no line search.
      if (decrease >= lastDecrease) break;
      lastDecrease = decrease;
      for (let i = 0; i < dimension; i++) weights[i] = (weights[i] as number) + (target[i] as number);
      loss = yield* lossAt(problem, weights);
    }
  }
  projectOntoBall(weights, problem.weightBound);
  return { weights, loss: yield* lossAt(problem, weights) };
}

function* searchLine(
  problem: FitProblem,
  from: Float64Array,
  direction: Float64Array,
  loss: number,
  decrease: number,
): Generator<void, Fit | null> {
  for (let part = 1; part > 1e-10; part /= 2) {
    const weights = from.map((weight, i) => weight + part * (direction[i] as number));
    const reached = yield* lossAt(problem, weights);
    if (reached <= loss - 1e-4 * part * decrease) return { weights, loss: reached };
  }
  return null;
}

function* lossAt(problem: FitProblem, weights: Float64Array): Generator<void, number> {
  const pause = Math.ceil(WORK_BETWEEN_PAUSES / weights.length / 8);
  let sum = problem.regularization * dot(weights, weights);
  for (let n = 0; n < problem.vectors.length; n++) {
    if (n % pause === pause - 1) yield;
    const x = problem.vectors[n] as Float64Array;
    sum += weightOf(problem, n) * logLoss(problem.offset + dot(weights, x), problem.labels[n] as number);
  }
  return sum;
}

type Model = { gradient: Float64Array; hessian: Float64Array };

/** Gradient and Hessian (a triangle) of the loss. */
export function modelAt(problem: FitProblem, weights: Float64Array): Model {
  return atOnce(modelInSteps(problem, weights));
}

function* modelInSteps(problem: FitProblem, weights: Float64Array): Generator<void, Model> {
  const dimension = weights.length;
  const pause = Math.ceil(WORK_BETWEEN_PAUSES / triangleLength(dimension));
  const gradient = weights.map((weight) => 2 * problem.regularization * weight);
  const hessian = new Float64Array(triangleLength(dimension));
  for (let n = 0; n < problem.vectors.length; n++) {
    if (n % pause === pause - 1) yield;
    const x = problem.vectors[n] as Float64Array;
    const label = problem.labels[n] as number;
    const p = logistic(-label * (problem.offset + dot(weights, x)));
    const pull = weightOf(problem, n) * label * p;
    for (let i = 0; i < dimension; i++) gradient[i] = (gradient[i] as number) - pull * (x[i] as number);
    addOuter(hessian, x, weightOf(problem, n) * p * (1 - p));
  }
  addToDiagonal(hessian, dimension, 2 * problem.regularization);
  return { gradient, hessian };
}

function weightOf(problem: FitProblem, n: number): number {
  return problem.sampleWeights?.[n] ?? 1;
}
