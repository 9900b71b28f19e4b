/**
 * Distribution functions by @stdlib, wrapped so that a tail is always computed as a tail: 1 - cdf loses every digit where tests are decided.
 */
import betainc from '@stdlib/math-base-special-betainc';
import gammainc from '@stdlib/math-base-special-gammainc';
import betaQuantileOf from '@stdlib/stats-base-dists-beta-quantile';
import { requireNumber, requireThat } from '../checks';

export { normalCdf, normalQuantile, normalTail, normalTwoSided } from './normal';

/**
 * P(X > x) of the chi-square, computed as a tail.
 * @param x any number; below 0 the tail is 1
 * @param degreesOfFreedom above 0
 * @throws NumericError for degrees of freedom that are not above 0, and for NaN
 * @example chiSquareTail(3.841458820694124, 1) // 0.05
 */
export function chiSquareTail(x: number, degreesOfFreedom: number): number {
  requireNumber('x', x);
  requireThat(degreesOfFreedom > 0, 'degreesOfFreedom', 'degrees of freedom must be above 0.');
  if (x === Infinity) return 0;
  return x <= 0 ? 1 : gammainc(x / 2, degreesOfFreedom / 2, true, true);
}

/**
 * x with P(X <= x) = p of the chi-square: bisection on the tail that is the smaller, so that both ends keep their digits.
 * @param p between 0 and 1; 0 gives 0 and 1 Infinity
 * @param degreesOfFreedom above 0
 * @throws NumericError for arguments outside, and for NaN
 * @example chiSquareQuantile(0.95, 9) // 16.918978
 */
export function chiSquareQuantile(p: number, degreesOfFreedom: number): number {
  requireThat(p >= 0 && p <= 1, 'p', 'p must lie between 0 and 1.');
  requireThat(degreesOfFreedom > 0, 'degreesOfFreedom', 'degrees of freedom must be above 0.');
  if (p === 0) return 0;
  if (p === 1) return Infinity;
  const half = degreesOfFreedom / 2;
  const below = (x: number): boolean =>
    p > 0.5 ? gammainc(x / 2, half, true, true) > 1 - p : gammainc(x / 2, half, true, false) < p;
  let low = 0;
  let high = Math.max(1, 2 * degreesOfFreedom);
  while (below(high)) high *= 2;
  for (let i = 0; i < 200; i++) {
    const middle = (low + high) / 2;
    if (middle === low || middle === high) break;
    if (below(middle)) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/**
 * P(X <= x) of the beta distribution.
 * @param x any number; 0 up to 0 and 1 from 1 on
 * @param a and b above 0
 * @throws NumericError for parameters that are not above 0, and for NaN
 * @example betaCdf(0.5, 2, 2) // 0.5
 */
export function betaCdf(x: number, a: number, b: number): number {
  requireNumber('x', x);
  requireThat(a > 0 && b > 0, 'a', `the parameters ${a} and ${b} must be above 0.`);
  if (x <= 0) return 0;
  if (x >= 1) return 1;
  return betainc(x, a, b, true, false);
}

/**
 * x with P(X <= x) = p of the beta distribution.
 * @param p between 0 and 1
 * @param a and b above 0
 * @throws NumericError for arguments outside, and for NaN
 * @example betaQuantile(0.5, 2, 2) // 0.5
 */
export function betaQuantile(p: number, a: number, b: number): number {
  requireThat(p >= 0 && p <= 1, 'p', `p is ${p}; it lies between 0 and 1.`);
  requireThat(a > 0 && b > 0, 'a', `the parameters ${a} and ${b} must be above 0.`);
  return betaQuantileOf(p, a, b);
}

/**
 * P(X >= count) for X binomial(trials, probability), as an incomplete beta function.
 * @param count and trials whole numbers, trials at least 0
 * @param probability 0 to 1
 * @throws NumericError for arguments outside, and for NaN
 * @example binomialTail(4, 100, 0.01) // 0.01837
 */
export function binomialTail(count: number, trials: number, probability: number): number {
  requireThat(
    Number.isInteger(count) && Number.isInteger(trials) && trials >= 0,
    'count',
    'count and trials must be whole numbers.',
  );
  requireThat(probability >= 0 && probability <= 1, 'probability', 'a probability lies between 0 and 1.');
  if (count <= 0) return 1;
  if (count > trials) return 0;
  return betaCdf(probability, count, trials - count + 1);
}
