import { factorise, solve, solveLower } from "./cholesky";
import { addToDiagonal } from "./triangle";
import { lengthOf } from "./vector";

/** Where the curvature is singular, this much of its mean diagonal is added. */
const RIDGE = 1e-13;

/**
 * The minimiser of θ·Hθ/2 - b·θ over ‖θ‖ ≤ bound, H a triangle, positive semi-definite: (H + μI) θ = b with the
 * smallest multiplier μ ≥ 0 that keeps to the bound, by Newton on 1/‖θ‖ - 1/bound, which climbs to it
 * (Moré, Sorensen, "Computing a trust region step", 1983).
 */
export function minimiseInBall(hessian: Float64Array, b: Float64Array, bound: number): Float64Array {
  const dimension = b.length;
  let multiplier = 0;
  let factor = factorOf(hessian, dimension, multiplier);
  if (factor === null) {
    let trace = 0;
    for (let i = 0, at = 0; i < dimension; i++, at += i + 1) trace += hessian[at] as number;
    multiplier = Math.max((RIDGE * trace) / dimension, Number.MIN_VALUE);
  }
  const point = new Float64Array(dimension);
  for (let round = 0; round < 100; round++) {
    factor ??= factorOf(hessian, dimension, multiplier);
    if (factor === null) {
      multiplier *= 10;
      continue;
    }
    point.set(b);
    solve(factor, point);
    const length = lengthOf(point);
    if (length <= bound * (1 + 1e-14)) break;
    const slope = point.slice();
    solveLower(factor, slope);
    multiplier += ((length / lengthOf(slope)) ** 2 * (length - bound)) / bound;
    factor = null;
  }
  return point;
}

function factorOf(hessian: Float64Array, dimension: number, multiplier: number): Float64Array | null {
  const factor = hessian.slice();
  let largest = 0;
  for (let i = 0, at = 0; i < dimension; i++, at += i + 1) largest = Math.max(largest, hessian[at] as number);
  addToDiagonal(factor, dimension, multiplier);
  // A pivot this far below the largest entry is rounding, not curvature.
  const smallestPivot = multiplier > 0 ? 0 : largest * 1e-15;
  return factorise(factor, dimension, smallestPivot) ? factor : null;
}
