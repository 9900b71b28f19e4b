/**
 * The numbers that exp and log(1 + u) are made of, for singles and doubles. The kernels read them from memory, each as often as a vector is wide:
 * a constant in the code costs several instructions each time, one in memory costs a load.
 *
 * Arguments of doubles are reduced by multiples of ln 2 in two parts (W. J. Cody and W. Waite, Software Manual for the Elementary Functions, 1980), those
 * of singles as powers of 2. The polynomials are the best ones in relative error for singles (9e-8, reweighted least squares) and interpolate at
 * Chebyshev's nodes for doubles (2e-17).
 */
export const CONSTANTS_SINGLE: readonly number[] = [
  // 1/ln 2, the number that rounds what it is added to; the powers of 2^f from the fifth down
  1.4426950408889634, 12582912,
  0.001326469985, 0.009671533908, 0.05550734001, 0.2402224176, 0.6931469774, 1,
  // one
  1,
  // log(1 + u) = 2 atanh(f / (2 + f)): sqrt 2 - 1, a half, then the powers of f / (2 + f), ln 2
  0.41421356, 0.5, 0.22222222, 0.28571429, 0.4, 0.66666667, 2, 0.69314718,
  // bounds of what exp is asked for, the floor of a row's curvature
  80, -80, 1e-10,
]; // prettier-ignore

export const CONSTANTS_DOUBLE: readonly number[] = [
  1.4426950408889634, 6755399441055744, 0.6931471803691238, 1.9082149292705877e-10,
  // exp, from the constant up to the eleventh power
  1, 1, 0.5000000000000001, 0.16666666666666669, 0.041666666666624094, 0.00833333333333006, 0.0013888888917230724, 0.00019841269863066696,
  2.4801521269532122e-5, 2.7557268439678e-6, 2.7620101012098e-7, 2.5100395159429246e-8,
  0.41421356237309503, 0.5,
  // powers of (f / (2 + f))^2, from the constant up
  2, 0.6666666666666765, 0.399999999993002, 0.2857142876112606, 0.22222197004980085, 0.1818363449406024, 0.15312452810757035,
  0.14810498033383585,
  0.6931471805599453, 690,
]; // prettier-ignore

/** Writes both as vectors of 16 bytes each, singles first. */
export function writeConstants(buffer: ArrayBufferLike, at: number): void {
  const singles = new Float32Array(buffer, at, CONSTANTS_SINGLE.length * 4);
  CONSTANTS_SINGLE.forEach((value, k) => singles.fill(value, 4 * k, 4 * k + 4));
  const doubles = new Float64Array(buffer, at + CONSTANTS_SINGLE.length * 16, CONSTANTS_DOUBLE.length * 2);
  CONSTANTS_DOUBLE.forEach((value, k) => doubles.fill(value, 2 * k, 2 * k + 2));
}
