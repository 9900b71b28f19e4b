import { requireNumber, requireThat } from '../checks';
import { logGamma, upperGamma } from './gamma';

/** Of a Poisson count, further than this many standard deviations from its mean (and a few counts more) nothing is left in double precision. */
const reach = 9;

/**
 * P(X > x) of the noncentral chi-square: chi-squares of k + 2j degrees of freedom, weighed by the Poisson probability of j at half the noncentrality. The tails
 * come from one another by Q(a + 1, y) = Q(a, y) + y^a e^-y / Gamma(a + 1), upwards, where nothing cancels.
 * @param x any number; below 0 the tail is 1
 * @param degreesOfFreedom above 0
 * @param noncentrality at least 0
 * @throws NumericError for arguments outside, and for NaN
 * @example noncentralChiSquareTail(12, 7, 5) // 0.4404
 * Source: N. L. Johnson, S. Kotz and N. Balakrishnan, Continuous Univariate Distributions 2, 1995, section 29.3 (from memory).
 */
export function noncentralChiSquareTail(x: number, degreesOfFreedom: number, noncentrality: number): number {
  requireNumber('x', x);
  requireThat(degreesOfFreedom > 0, 'degreesOfFreedom', 'degrees of freedom must be above 0.');
  requireThat(noncentrality >= 0 && noncentrality < Infinity, 'noncentrality', 'the noncentrality must be at least 0.');
  if (x <= 0) return 1;
  if (x === Infinity) return 0;
  if (noncentrality === 0) return upperGamma(degreesOfFreedom / 2, x / 2);
  const mean = noncentrality / 2;
  const y = x / 2;
  const spread = reach * Math.sqrt(mean) + 30;
  const first = Math.max(0, Math.floor(mean - spread));
  const last = Math.ceil(mean + spread);
  let weight = Math.exp(first * Math.log(mean) - mean - logGamma(first + 1));
  let a = degreesOfFreedom / 2 + first;
  let tail = upperGamma(a, y);
  let step = Math.exp(a * Math.log(y) - y - logGamma(a + 1));
  let sum = 0;
  let weights = 0;
  for (let j = first; j <= last; j++) {
    sum += weight * tail;
    weights += weight;
    weight *= mean / (j + 1);
    tail += step;
    a++;
    step *= y / a;
  }
  // The weights add up to 1 but for rounding of large logarithms and what lies out of reach.
  return Math.min(1, sum / weights);
}

/**
 * The noncentrality at which P(X > x) is the given tail: what an observed x bounds it by. 0 where even the central chi-square has a larger tail.
 * @param x at least 0; @param degreesOfFreedom above 0; @param tail between 0 and 1, both excluded
 * @throws NumericError for arguments outside, and for NaN
 * @example noncentralityAt(30, 7, 0.025) // 7.603
 * Source: as `noncentralChiSquareTail`; the tail rises with the noncentrality, so it is found by bisection.
 */
export function noncentralityAt(x: number, degreesOfFreedom: number, tail: number): number {
  requireThat(x >= 0 && x < Infinity, 'x', 'x must be at least 0.');
  requireThat(tail > 0 && tail < 1, 'tail', 'the tail must lie between 0 and 1.');
  if (noncentralChiSquareTail(x, degreesOfFreedom, 0) >= tail) return 0;
  let low = 0;
  let high = Math.max(1, x);
  while (noncentralChiSquareTail(x, degreesOfFreedom, high) < tail) {
    low = high;
    high *= 2;
  }
  while (high - low > 1e-10 * high) {
    const middle = (low + high) / 2;
    if (middle === low || middle === high) break;
    if (noncentralChiSquareTail(x, degreesOfFreedom, middle) < tail) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
