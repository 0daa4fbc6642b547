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

/** out = matrix · x, in O(d²), always adding in the same order. Rows go in pairs: `out` is then passed over half as often. */
export function multiply(matrix: Float64Array, x: Float64Array, out: Float64Array): void {
  const dimension = x.length;
  let row = 0;
  let i = 0;
  for (; i + 1 < dimension; i += 2) {
    const below = row + i + 1;
    const xa = x[i] as number;
    const xb = x[i + 1] as number;
    let a = 0;
    let b = 0;
    for (let j = 0; j < i; j++) {
      const upper = matrix[row + j] as number;
      const lower = matrix[below + j] as number;
      a += upper * (x[j] as number);
      b += lower * (x[j] as number);
      out[j] = (out[j] as number) + (upper * xa + lower * xb);
    }
    const corner = matrix[below + i] as number;
    out[i] = a + (matrix[row + i] as number) * xa + corner * xb;
    out[i + 1] = b + corner * xa + (matrix[below + i + 1] as number) * xb;
    row = below + i + 2;
  }
  if (i < dimension) {
    const xi = x[i] as number;
    let sum = 0;
    for (let j = 0; j < i; j++) {
      const entry = matrix[row + j] as number;
      sum += entry * (x[j] as number);
      out[j] = (out[j] as number) + entry * xi;
    }
    out[i] = sum + (matrix[row + i] as number) * xi;
  }
}

/** matrix += factor · u uᵀ, in O(d²), rows in pairs. */
export function addOuter(matrix: Float64Array, u: Float64Array, factor: number): void {
  const dimension = u.length;
  let row = 0;
  let i = 0;
  for (; i + 1 < dimension; i += 2) {
    const below = row + i + 1;
    const a = factor * (u[i] as number);
    const b = factor * (u[i + 1] as number);
    for (let j = 0; j <= i; j++) {
      const uj = u[j] as number;
      matrix[row + j] = (matrix[row + j] as number) + a * uj;
      matrix[below + j] = (matrix[below + j] as number) + b * uj;
    }
    const corner = below + i + 1;
    matrix[corner] = (matrix[corner] as number) + b * (u[i + 1] as number);
    row = corner + 1;
  }
  if (i < dimension) {
    const scaled = factor * (u[i] as number);
    for (let j = 0; j <= i; j++) matrix[row + j] = (matrix[row + j] as number) + scaled * (u[j] as number);
  }
}

/** matrix += value · I. */
export function addToDiagonal(matrix: Float64Array, dimension: number, value: number): void {
  for (let i = 0, at = 0; i < dimension; i++, at += i + 1) matrix[at] = (matrix[at] as number) + value;
}
