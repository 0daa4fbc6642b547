import fc from "fast-check";
import { expect, test } from "vitest";
import { projectInMetric } from "@/lib/scorer/ball";
import { factorise, invert, solve } from "@/lib/scorer/cholesky";
import { addOuter, multiply, scaledIdentity } from "@/lib/scorer/triangle";
import { seededNumbers } from "./fixture";

/** A random positive definite triangle, its eigenvalues over some four orders of magnitude. */
function randomTriangle(dimension: number, seed: number): Float64Array {
  const next = seededNumbers(seed);
  const triangle = scaledIdentity(dimension, 1e-3);
  for (let n = 0; n < dimension; n++) {
    const u = Float64Array.from({ length: dimension }, () => 2 * next() - 1);
    addOuter(triangle, u, 10 ** (3 * next() - 2));
  }
  return triangle;
}

function entry(triangle: Float64Array, i: number, j: number): number {
  const [row, column] = i >= j ? [i, j] : [j, i];
  return triangle[(row * (row + 1)) / 2 + column] as number;
}

const anyShape = [fc.integer({ min: 1, max: 9 }), fc.integer()] as const;

test("a triangle times a vector is what the full matrix gives", () => {
  fc.assert(
    fc.property(...anyShape, (dimension, seed) => {
      const triangle = randomTriangle(dimension, seed);
      const x = Float64Array.from({ length: dimension }, seededNumbers(seed + 1));
      const out = new Float64Array(dimension).fill(7);
      multiply(triangle, x, out);
      for (let i = 0; i < dimension; i++) {
        const sum = x.reduce((total, value, j) => total + value * entry(triangle, i, j), 0);
        expect(out[i]).toBeCloseTo(sum, 12);
      }
    }),
    { seed: 1 },
  );
});

test("the Cholesky factor solves, and inverts, at even and odd sizes", () => {
  fc.assert(
    fc.property(...anyShape, (dimension, seed) => {
      const triangle = randomTriangle(dimension, seed);
      const x = Float64Array.from({ length: dimension }, seededNumbers(seed + 1));
      const b = new Float64Array(dimension);
      multiply(triangle, x, b);
      const factor = triangle.slice();
      expect(factorise(factor, dimension)).toBe(true);
      const inverse = new Float64Array(triangle.length);
      invert(factor, inverse, dimension);
      const back = new Float64Array(dimension);
      multiply(inverse, b, back);
      solve(factor, b);
      for (let i = 0; i < dimension; i++) {
        expect(b[i]).toBeCloseTo(x[i] as number, 8);
        expect(back[i]).toBeCloseTo(x[i] as number, 8);
      }
    }),
    { seed: 2 },
  );
});

test("a matrix that is not positive definite has no factor", () => {
  for (const dimension of [1, 2, 3, 4, 5]) {
    for (let bad = 0; bad < dimension; bad++) {
      const triangle = scaledIdentity(dimension, 1);
      triangle[(bad * (bad + 1)) / 2 + bad] = -1;
      expect(factorise(triangle, dimension)).toBe(false);
    }
  }
});

test("the projection is on the ball, and m - θ = μPθ with μ ≥ 0: the nearest point in the norm of A", () => {
  fc.assert(
    fc.property(...anyShape, fc.double({ min: 0.01, max: 3, noNaN: true }), (dimension, seed, bound) => {
      const triangle = randomTriangle(dimension, seed);
      const next = seededNumbers(seed + 1);
      const mean = Float64Array.from({ length: dimension }, () => 8 * next() - 4);
      const before = mean.slice();
      projectInMetric(mean, triangle, bound);
      if (Math.hypot(...before) <= bound) {
        expect(mean).toEqual(before);
        return;
      }
      expect(Math.abs(Math.hypot(...mean) / bound - 1)).toBeLessThan(1e-12);
      const slope = new Float64Array(dimension);
      multiply(triangle, mean, slope);
      const gap = before.map((value, i) => value - (mean[i] as number));
      const multiplier =
        gap.reduce((sum, value, i) => sum + value * (slope[i] as number), 0) /
        slope.reduce((sum, value) => sum + value * value, 0);
      expect(multiplier).toBeGreaterThan(0);
      for (let i = 0; i < dimension; i++) {
        expect(Math.abs((gap[i] as number) - multiplier * (slope[i] as number))).toBeLessThan(1e-6);
      }
    }),
    { seed: 3, numRuns: 300 },
  );
});
