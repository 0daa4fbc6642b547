import { projectInMetric } from "./ball";
import { addOuter, multiply, scaledIdentity, triangleLength } from "./triangle";
import { dot, lengthOf } from "./vector";

/**
 * State of a second-order rule: mean m and P = A⁻¹, A the curvature gathered so far.
 * Starts at m = 0, P = startingVariance·I. Every move is O(d²), without a solve.
 */
export class Belief {
  readonly mean: Float64Array;
  readonly triangle: Float64Array;

  constructor(
    readonly dimension: number,
    private readonly startingVariance: number,
  ) {
    this.mean = new Float64Array(dimension);
    this.triangle = scaledIdentity(dimension, startingVariance);
  }

  static stateLength(dimension: number): number {
    return dimension + triangleLength(dimension);
  }

  /** u = P x into `out`; returns the leverage s = x·u, never below 0. */
  direction(x: Float64Array, out: Float64Array): number {
    multiply(this.triangle, x, out);
    return Math.max(0, dot(x, out));
  }

  /** m += shift·u, P -= shrink·u uᵀ. */
  move(u: Float64Array, shift: number, shrink: number): void {
    for (let i = 0; i < this.dimension; i++) {
      this.mean[i] = (this.mean[i] as number) + shift * (u[i] as number);
    }
    addOuter(this.triangle, u, -shrink);
  }

  /** Projects m onto ‖m‖ ≤ bound in the norm of A; returns by how much m moved, null when it was within. */
  keepWithin(bound: number): Float64Array | null {
    if (lengthOf(this.mean) <= bound) return null;
    const before = this.mean.slice();
    projectInMetric(this.mean, this.triangle, bound);
    return before.map((value, i) => (this.mean[i] as number) - value);
  }

  /** P ← P/rho; then no variance may pass the starting one: row and column are scaled back, without which P diverges. */
  forget(rho: number): void {
    const { triangle, dimension } = this;
    const scale = new Float64Array(dimension);
    for (let i = 0, at = 0; i < dimension; i++, at += i + 1) {
      const variance = (triangle[at] as number) / rho;
      scale[i] = variance > this.startingVariance ? Math.sqrt(this.startingVariance / variance) : 1;
    }
    for (let i = 0, at = 0; i < dimension; i++) {
      for (let j = 0; j <= i; j++, at++) {
        triangle[at] = ((triangle[at] as number) / rho) * (scale[i] as number) * (scale[j] as number);
      }
    }
  }

  write(state: Float64Array, from: number): void {
    state.set(this.mean, from);
    state.set(this.triangle, from + this.dimension);
  }

  read(state: Float64Array, from: number): void {
    const middle = from + this.dimension;
    this.mean.set(state.subarray(from, middle));
    this.triangle.set(state.subarray(middle, middle + this.triangle.length));
  }
}
