import { DimensionError, NotFiniteError } from "./errors";

/** Sum of products in index order: the one order of addition used everywhere. */
export function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += (a[i] as number) * (b[i] as number);
  return sum;
}

/** Euclidean length, safe where the squares would overflow. */
export function lengthOf(x: Float64Array): number {
  const squared = dot(x, x);
  if (Number.isFinite(squared)) return Math.sqrt(squared);
  let largest = 0;
  for (const entry of x) largest = Math.max(largest, Math.abs(entry));
  let sum = 0;
  for (const entry of x) sum += (entry / largest) ** 2;
  return largest * Math.sqrt(sum);
}

/** Errors: DimensionError, NotFiniteError naming the coordinate. */
export function checkVector(x: Float64Array, dimension: number): void {
  if (!(x instanceof Float64Array) || x.length !== dimension) {
    throw new DimensionError(`vector has ${x?.length} entries; the scorer takes ${dimension} doubles`);
  }
  for (let i = 0; i < dimension; i++) {
    if (!Number.isFinite(x[i])) throw new NotFiniteError(`vector entry ${i} is ${x[i]}`);
  }
}

/** The vector itself when ‖x‖ ≤ bound, else a copy scaled down to that length. */
export function withinLength(x: Float64Array, bound: number): Float64Array {
  const length = lengthOf(x);
  if (length <= bound) return x;
  // Two steps, so that neither the ratio nor the product leaves the range of a double.
  return Float64Array.from(x, (entry) => (entry / length) * bound);
}
