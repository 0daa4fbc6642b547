/**
 * Replaces the lower triangle of a symmetric matrix by its Cholesky factor L (matrix = L Lᵀ), in blocks of two rows
 * by two columns, which halves the reads.
 * Returns false, leaving the array part-way, when a pivot is not above `smallestPivot`.
 */
export function factorise(matrix: Float64Array, dimension: number, smallestPivot = 0): boolean {
  let row = 0;
  let i = 0;
  for (; i + 1 < dimension; i += 2) {
    const below = row + i + 1;
    for (let j = 0, column = 0; j < i; j += 2) {
      column = fillBlock(matrix, row, below, j, column);
    }
    if (!fillPivot(matrix, row, i, smallestPivot)) return false;
    matrix[below + i] = gap(matrix, below, row, i) / (matrix[row + i] as number);
    if (!fillPivot(matrix, below, i + 1, smallestPivot)) return false;
    row = below + i + 2;
  }
  if (i === dimension) return true;
  for (let j = 0, column = 0; j < i; column += ++j) {
    matrix[row + j] = gap(matrix, row, column, j) / (matrix[column + j] as number);
  }
  return fillPivot(matrix, row, i, smallestPivot);
}

/** Entries (upper, j), (upper, j + 1), (lower, j), (lower, j + 1), given where the rows start; returns where row j + 2 does. */
function fillBlock(matrix: Float64Array, upper: number, lower: number, j: number, left: number): number {
  const right = left + j + 1;
  let a = matrix[upper + j] as number;
  let b = matrix[upper + j + 1] as number;
  let c = matrix[lower + j] as number;
  let e = matrix[lower + j + 1] as number;
  for (let k = 0; k < j; k++) {
    const u = matrix[upper + k] as number;
    const v = matrix[lower + k] as number;
    const l = matrix[left + k] as number;
    const r = matrix[right + k] as number;
    a -= u * l;
    b -= u * r;
    c -= v * l;
    e -= v * r;
  }
  a /= matrix[left + j] as number;
  c /= matrix[left + j] as number;
  matrix[upper + j] = a;
  matrix[lower + j] = c;
  matrix[upper + j + 1] = (b - a * (matrix[right + j] as number)) / (matrix[right + j + 1] as number);
  matrix[lower + j + 1] = (e - c * (matrix[right + j] as number)) / (matrix[right + j + 1] as number);
  return right + j + 2;
}

/** Entry j of one row less the product of the two rows before it. */
function gap(matrix: Float64Array, row: number, column: number, j: number): number {
  let rest = matrix[row + j] as number;
  for (let k = 0; k < j; k++) rest -= (matrix[row + k] as number) * (matrix[column + k] as number);
  return rest;
}

function fillPivot(matrix: Float64Array, row: number, i: number, smallestPivot: number): boolean {
  const pivot = gap(matrix, row, row, i);
  if (!(pivot > smallestPivot)) return false;
  matrix[row + i] = Math.sqrt(pivot);
  return true;
}

/** Solves L z = b in place. */
export function solveLower(factor: Float64Array, b: Float64Array): void {
  for (let i = 0, row = 0; i < b.length; row += ++i) {
    let sum = b[i] as number;
    for (let k = 0; k < i; k++) sum -= (factor[row + k] as number) * (b[k] as number);
    b[i] = sum / (factor[row + i] as number);
  }
}

/** Solves Lᵀ z = b in place. */
function solveUpper(factor: Float64Array, b: Float64Array): void {
  for (let i = b.length - 1; i >= 0; i--) {
    const row = (i * (i + 1)) / 2;
    const value = (b[i] as number) / (factor[row + i] as number);
    b[i] = value;
    for (let k = 0; k < i; k++) b[k] = (b[k] as number) - (factor[row + k] as number) * value;
  }
}

/** Solves L Lᵀ z = b in place. */
export function solve(factor: Float64Array, b: Float64Array): void {
  solveLower(factor, b);
  solveUpper(factor, b);
}

/** out = (L Lᵀ)⁻¹ as a lower triangle. */
export function invert(factor: Float64Array, out: Float64Array, dimension: number): void {
  const column = new Float64Array(dimension);
  for (let j = 0; j < dimension; j++) {
    column.fill(0);
    column[j] = 1;
    solve(factor, column);
    for (let i = j; i < dimension; i++) out[(i * (i + 1)) / 2 + j] = column[i] as number;
  }
}
