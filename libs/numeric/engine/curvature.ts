/** The curvature of a lane's quadratic model: a weighted Gram matrix with the intercept eliminated. */
export interface Curvature {
  /** Number of columns. */
  readonly size: number;
  /** (m + 1) x (m + 1), the intercept first. */
  readonly gram: Float64Array;
  /** m x m. */
  readonly hessian: Float64Array;
}

/** Keeps exactly collinear columns from making a set of coordinates singular; the exact gradient decides, so only speed is at stake. */
const FAINT = 1e-7;

/**
 * @param gram (m + 1) x (m + 1), the intercept first
 * @param factor by which the matrix is multiplied: total weight of all rows over that of the lane's
 */
export function curvatureOf(gram: Float64Array, size: number, factor = 1): Curvature {
  const width = size + 1;
  const scaled = factor === 1 ? gram : gram.map((value) => value * factor);
  const hessian = new Float64Array(size * size);
  for (let a = 0; a < size; a++) {
    const ratio = scaled[(a + 1) * width] / scaled[0];
    for (let b = 0; b < size; b++) hessian[a * size + b] = scaled[(a + 1) * width + b + 1] - ratio * scaled[b + 1];
    hessian[a * size + a] *= 1 + FAINT;
  }
  return { size, gram: scaled, hessian };
}

/** Sum of some of the grams, without one: what a fold's training rows have. */
export function sumOfGrams(grams: readonly Float64Array[], without: number): Float64Array {
  const sum = new Float64Array(grams[0].length);
  grams.forEach((gram, fold) => {
    if (fold === without) return;
    for (let k = 0; k < sum.length; k++) sum[k] += gram[k];
  });
  return sum;
}
