/**
 * Cholesky factorisation of a small symmetric matrix in place (lower triangle, row-major, `size` x `size`).
 * @returns false when a pivot is not clearly positive: the matrix is singular to working precision
 */
export function factorise(matrix: Float64Array, size: number): boolean {
  for (let j = 0; j < size; j++) {
    let pivot = matrix[j * size + j];
    const before = pivot;
    for (let k = 0; k < j; k++) pivot -= matrix[j * size + k] * matrix[j * size + k];
    if (!(pivot > 1e-11 * before)) return false;
    const root = Math.sqrt(pivot);
    matrix[j * size + j] = root;
    for (let i = j + 1; i < size; i++) {
      let sum = matrix[i * size + j];
      for (let k = 0; k < j; k++) sum -= matrix[i * size + k] * matrix[j * size + k];
      matrix[i * size + j] = sum / root;
    }
  }
  return true;
}

/** Solves L L' x = b in place, L as left by `factorise`. */
export function solveFactorised(factor: Float64Array, size: number, b: Float64Array): void {
  for (let i = 0; i < size; i++) {
    let sum = b[i];
    for (let k = 0; k < i; k++) sum -= factor[i * size + k] * b[k];
    b[i] = sum / factor[i * size + i];
  }
  for (let i = size - 1; i >= 0; i--) {
    let sum = b[i];
    for (let k = i + 1; k < size; k++) sum -= factor[k * size + i] * b[k];
    b[i] = sum / factor[i * size + i];
  }
}
