import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  betaCdf,
  betaQuantile,
  binomialTail,
  chiSquareQuantile,
  chiSquareTail,
  normalCdf,
  normalQuantile,
  normalTail,
  normalTwoSided,
} from './tails';

describe('distributions', () => {
  it('keep their digits far out, where 1 - cdf has none', () => {
    // Mills: P(Z > 10) = 7.61985e-24 (Abramowitz and Stegun, table 26.2, from memory to these digits).
    expect(normalTail(10) / 7.61985e-24).toBeCloseTo(1, 5);
    expect(normalTwoSided(-10)).toBe(2 * normalTail(10));
    expect(chiSquareTail(100, 1) / normalTwoSided(10)).toBeCloseTo(1, 10);
    expect(chiSquareTail(0, 3)).toBe(1);
    expect(chiSquareTail(Infinity, 3)).toBe(0);
  });

  it('the normal quantile keeps its digits in the tail', () => {
    // R 4.2.2, qnorm (algorithm AS 241 of M. J. Wichura, Applied Statistics 37, 1988): exact to the last digits of a double.
    const wanted: [number, number][] = [
      [1e-100, -21.27345356096532],
      [1e-12, -7.034483825301132],
      [1e-7, -5.199337582192817],
      [0.1, -1.2815515655446008],
      [0.999999999, 5.997807019601638],
    ];
    wanted.forEach(([p, z]) => expect(Math.abs(normalQuantile(p) / z - 1)).toBeLessThan(1e-14));
    expect([normalQuantile(0), normalQuantile(0.5), normalQuantile(1)]).toEqual([-Infinity, 0, Infinity]);
    expect(() => normalQuantile(NaN)).toThrow('p is NaN');
    expect(() => normalQuantile(1.1)).toThrow();
    fc.assert(
      fc.property(fc.double({ min: 2, max: 100, noNaN: true }), (digits) => {
        const p = 10 ** -digits;
        expect(Math.abs(normalTail(-normalQuantile(p)) / p - 1)).toBeLessThan(1e-12);
      }),
    );
  });

  it('chi-square with 2 degrees of freedom is exponential', () => {
    fc.assert(
      fc.property(fc.double({ min: 0, max: 200, noNaN: true }), (x) => {
        expect(chiSquareTail(x, 2) / Math.exp(-x / 2)).toBeCloseTo(1, 10);
      }),
    );
  });

  it('quantiles undo their distribution', () => {
    const inside = fc.double({ min: 1e-6, max: 1 - 1e-6, noNaN: true });
    fc.assert(
      fc.property(inside, fc.integer({ min: 1, max: 40 }), (p, degrees) => {
        expect(normalCdf(normalQuantile(p))).toBeCloseTo(p, 10);
        expect(1 - chiSquareTail(chiSquareQuantile(p, degrees), degrees)).toBeCloseTo(p, 9);
        expect(betaCdf(betaQuantile(p, degrees, 3), degrees, 3)).toBeCloseTo(p, 8);
      }),
    );
    expect([chiSquareQuantile(0, 2), chiSquareQuantile(1, 2)]).toEqual([0, Infinity]);
  });

  it('the binomial tail is the sum of its terms', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 25 }), fc.double({ min: 0.01, max: 0.99, noNaN: true }), (trials, p) => {
        let term = (1 - p) ** trials;
        let below = 0;
        for (let k = 0; k <= trials; k++) {
          expect(binomialTail(k, trials, p)).toBeCloseTo(1 - below, 10);
          below += term;
          term *= ((trials - k) / (k + 1)) * (p / (1 - p));
        }
      }),
    );
    expect([binomialTail(0, 5, 0.5), binomialTail(6, 5, 0.5)]).toEqual([1, 0]);
    expect(() => binomialTail(1.5, 5, 0.5)).toThrow();
  });
});
