/**
 * Symmetric d×d matrices stored as their lower triangle, row by row: entry (i, j), j ≤ i, at i(i+1)/2 + j.
 * Symmetry is exact because there is only one copy of each entry.
 */

export function triangleLength(dimension: number): number {
  return (dimension * (dimension + 1)) / 2;
}

export function scaledIdentity(dimension: number, value: number): Float64Array {
  const matrix = new Float64Array(triangleLength(dimension));
  for (let i = 0, at = 0; i < dimension; i++, at += i + 1) matrix[at] = value;
  return matrix;
}

/** out = matrix · x, in O(d²), always adding in the same order. */
export function multiply(matrix: Float64Array, x: Float64Array, out: Float64Array): void {
  const dimension = x.length;
  let at = 0;
  for (let i = 0; i < dimension; i++) {
    const xi = x[i] as number;
    let sum = 0;
    for (let j = 0; j < i; j++, at++) {
      const entry = matrix[at] as number;
      sum += entry * (x[j] as number);
      out[j] = (out[j] as number) + entry * xi;
    }
    out[i] = sum + (matrix[at++] as number) * xi;
  }
}

/** matrix += factor · u uᵀ, in O(d²). */
export function addOuter(matrix: Float64Array, u: Float64Array, factor: number): void {
  const dimension = u.length;
  let at = 0;
  for (let i = 0; i < dimension; i++) {
    const scaled = factor * (u[i] as number);
    for (let j = 0; j <= i; j++, at++) {
      matrix[at] = (matrix[at] as number) + scaled * (u[j] as number);
    }
  }
}
