import gammainc from '@stdlib/math-base-special-gammainc';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { logGamma, upperGamma } from './gamma';

describe('the gamma function', () => {
  it('has the logarithms of factorials, and of one half', () => {
    let sum = 0;
    for (let n = 1; n <= 60; n++) {
      expect(Math.abs(logGamma(n) - sum)).toBeLessThan(1e-13 * Math.max(1, sum));
      sum += Math.log(n);
    }
    expect(logGamma(0.5)).toBeCloseTo(0.5 * Math.log(Math.PI), 13);
  });

  it('has the upper part of the library, in the tail too', () => {
    const number = (least: number, most: number) => fc.double({ min: Math.log(least), max: Math.log(most), noNaN: true }).map(Math.exp);
    fc.assert(
      fc.property(number(0.5, 200), number(0.01, 3), (a, ratio) => {
        const wanted = gammainc(a * ratio, a, true, true);
        const found = upperGamma(a, a * ratio);
        // A hundred steps of the fraction, and a front factor that is the exponential of a difference of logarithms of about this size.
        const rounding = 1e-13 + 4e-15 * a * Math.log(Math.max(2, a));
        if (wanted > 1e-290) expect(Math.abs(found - wanted)).toBeLessThan(rounding * Math.max(wanted, wanted > 0.1 ? 1 : 0));
      }),
      { numRuns: 2000 },
    );
    expect(upperGamma(3, 0)).toBe(1);
  });

  // SciPy 1.10.1 (Debian), special.gammaincc. At such sizes the library is not its equal: of the last one it makes 0.5718.
  it.each([
    [200, 180, 0.9251419650158405],
    [1000, 1000, 0.4957947558197845],
    [2500, 2450, 0.8413611103322287],
    [2999, 2990, 0.5629372514916137],
  ])('has the upper part of SciPy: a = %d, y = %d', (a, y, wanted) => {
    expect(Math.abs(upperGamma(a, y) - wanted)).toBeLessThan(5e-12);
  });
});
