/**
 * Replaces the lower triangle of a symmetric matrix by its Cholesky factor L (matrix = L Lᵀ).
 * Returns false, leaving the array part-way, when a pivot is not above `smallestPivot`.
 */
export function factorise(matrix: Float64Array, dimension: number, smallestPivot = 0): boolean {
  for (let i = 0, row = 0; i < dimension; row += ++i) {
    for (let j = 0, column = 0; j <= i; column += ++j) {
      let sum = matrix[row + j] as number;
      for (let k = 0; k < j; k++) sum -= (matrix[row + k] as number) * (matrix[column + k] as number);
      if (j < i) {
        matrix[row + j] = sum / (matrix[column + j] as number);
      } else {
        if (!(sum > smallestPivot)) return false;
        matrix[row + i] = Math.sqrt(sum);
      }
    }
  }
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
export function solveUpper(factor: Float64Array, b: Float64Array): void {
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
