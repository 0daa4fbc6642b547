import { factorise, solve } from "./cholesky";
import { addToDiagonal, multiply } from "./triangle";
import { dot, lengthOf } from "./vector";

const LENGTH_TOLERANCE = 1e-9;

/** Scales a vector longer than the bound down to it, in place. */
export function projectOntoBall(mean: Float64Array, bound: number): void {
  const length = lengthOf(mean);
  if (length <= bound) return;
  for (let i = 0; i < mean.length; i++) mean[i] = ((mean[i] as number) / length) * bound;
}

/**
 * Moves `mean` to the point of the ball ‖θ‖ ≤ bound nearest to it in the norm of A = P⁻¹, P given as a triangle:
 * the projection of the online Newton step (Hazan, Agarwal, Kale 2007).
 * It solves (I + μP) θ = mean for the multiplier μ ≥ 0 at which ‖θ‖ = bound, by Newton on 1/‖θ‖, which climbs
 * to it from μ = 0 without overshooting (Moré, Sorensen 1983). Each round is one factorisation, O(d³); one mostly
 * does. Once the length is right to a billionth, the rest is taken off by scaling.
 */
export function projectInMetric(mean: Float64Array, triangle: Float64Array, bound: number): void {
  const dimension = mean.length;
  const point = Float64Array.from(mean);
  const slope = new Float64Array(dimension);
  const factor = new Float64Array(triangle.length);
  let multiplier = 0;
  for (let round = 0; round < 60; round++) {
    const length = lengthOf(point);
    if (length <= bound * (1 + LENGTH_TOLERANCE)) break;
    multiply(triangle, point, slope);
    if (multiplier > 0) solve(factor, slope);
    multiplier += ((length - bound) / bound) * ((length * length) / dot(point, slope));
    for (let at = 0; at < factor.length; at++) factor[at] = multiplier * (triangle[at] as number);
    addToDiagonal(factor, dimension, 1);
    factorise(factor, dimension);
    point.set(mean);
    solve(factor, point);
  }
  mean.set(point);
  projectOntoBall(mean, bound);
}
