/**
 * The normal distribution by @stdlib. Apart from `tails`: the browser needs no more than this, and @stdlib's gamma functions try out `eval`
 * when they are loaded, which the client's content security policy forbids and reports.
 */
import erfc from '@stdlib/math-base-special-erfc';
import erfcinv from '@stdlib/math-base-special-erfcinv';
import { requireNumber, requireThat } from '../checks';

/** P(Z <= z) of the standard normal. @throws NumericError for NaN @example normalCdf(1.96) // 0.975002 */
export function normalCdf(z: number): number {
  requireNumber('z', z);
  return 0.5 * erfc(-z / Math.SQRT2);
}

/**
 * P(Z > z) of the standard normal, computed as a tail. A NaN is what a test without a standard error passes on, and comes back as NaN.
 * @example normalTail(1.6448536269514722) // 0.05
 */
export function normalTail(z: number): number {
  return 0.5 * erfc(z / Math.SQRT2);
}

/** P(|Z| > |z|): the two-sided p-value of a standard normal statistic; NaN for NaN, as `normalTail`. @example normalTwoSided(1.959964) // 0.05 */
export function normalTwoSided(z: number): number {
  return erfc(Math.abs(z) / Math.SQRT2);
}

/**
 * z with P(Z <= z) = p, from the smaller of the two tails: by way of 2p - 1 a small p would lose its digits.
 * @param p between 0 and 1; 0 and 1 give -Infinity and Infinity
 * @throws NumericError for a p outside, and for NaN
 * @example normalQuantile(0.975) // 1.959964
 */
export function normalQuantile(p: number): number {
  requireThat(p >= 0 && p <= 1, 'p', `p is ${p}; it lies between 0 and 1.`);
  return p < 0.5 ? -Math.SQRT2 * erfcinv(2 * p) : Math.SQRT2 * erfcinv(2 * (1 - p));
}
