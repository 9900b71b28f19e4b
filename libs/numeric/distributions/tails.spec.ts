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
