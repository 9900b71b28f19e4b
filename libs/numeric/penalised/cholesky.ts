/**
 * Cholesky factorisation of a small symmetric matrix in place (lower triangle, row-major, `size` x `size`).
 * @returns false when a pivot is not clearly positive: the matrix is singular to working precision
 */
export function factorise(matrix: Float64Array, size: number): boolean {
  return factoriseRows(matrix, size, 0, size);
}

/**
 * Rows `from` to `to` - 1 of a factorisation whose rows before are factorised already: a row rests on those before it alone.
 * @param matrix lower triangle, row-major, rows `stride` apart; in the rows before `from` the factor
 */
export function factoriseRows(matrix: Float64Array, stride: number, from: number, to: number): boolean {
  for (let i = from; i < to; i++) {
    const row = i * stride;
    let pivot = matrix[row + i];
    const before = pivot;
    for (let j = 0; j < i; j++) {
      const other = j * stride;
      let sum = matrix[row + j];
      for (let k = 0; k < j; k++) sum -= matrix[row + k] * matrix[other + k];
      const value = sum / matrix[other + j];
      matrix[row + j] = value;
      pivot -= value * value;
    }
    if (!(pivot > 1e-11 * before)) return false;
    matrix[row + i] = Math.sqrt(pivot);
  }
  return true;
}

/** Solves L L' x = b in place, L as left by `factorise`, its rows `stride` apart. */
export function solveFactorised(factor: Float64Array, size: number, b: Float64Array, stride = size): void {
  for (let i = 0; i < size; i++) {
    const row = i * stride;
    let sum = b[i];
    for (let k = 0; k < i; k++) sum -= factor[row + k] * b[k];
    b[i] = sum / factor[row + i];
  }
  for (let i = size - 1; i >= 0; i--) {
    const value = b[i] / factor[i * stride + i];
    b[i] = value;
    const row = i * stride;
    for (let k = 0; k < i; k++) b[k] -= factor[row + k] * value;
  }
}
