/**
 * The normal distribution by @stdlib. Apart from `tails`: the browser needs no more than this, and @stdlib's gamma functions try out `eval`
 * when they are loaded, which the client's content security policy forbids and reports.
 */
import erfc from '@stdlib/math-base-special-erfc';
import normalQuantileOf from '@stdlib/stats-base-dists-normal-quantile';

/** P(Z <= z) of the standard normal. @example normalCdf(1.96) // 0.975002 */
export function normalCdf(z: number): number {
  return 0.5 * erfc(-z / Math.SQRT2);
}

/** P(Z > z) of the standard normal. @example normalTail(1.6448536269514722) // 0.05 */
export function normalTail(z: number): number {
  return 0.5 * erfc(z / Math.SQRT2);
}

/** Two-sided p-value of a standard normal statistic. */
export function normalTwoSided(z: number): number {
  return erfc(Math.abs(z) / Math.SQRT2);
}

/** z with P(Z <= z) = p. @example normalQuantile(0.975) // 1.959964 */
export function normalQuantile(p: number): number {
  return normalQuantileOf(p, 0, 1);
}
