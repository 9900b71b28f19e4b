import { describe, expect, it } from 'vitest';
import { noncentralChiSquareTail, noncentralityAt } from './noncentral';
import { chiSquareTail } from './tails';

describe('the noncentral chi-square', () => {
  // SciPy 1.17.1, stats.ncx2.sf; in the last two lines the logarithms alone have an error of 1e-10.
  it.each([
    [12, 7, 5, 0.4404011574527799, 1e-13],
    [30, 7, 0.5, 0.00020918363744116628, 1e-13],
    [0.5, 3, 10, 0.9991369881454226, 1e-13],
    [250, 9, 180, 0.016982923537538934, 1e-12],
    [5, 1, 1e-6, 0.02534739190239327, 1e-13],
    [46_000, 7, 45_000, 0.009902892757197832, 1e-8],
    [449_000, 12, 450_000, 0.7745675889176101, 1e-8],
  ])('has the tail of SciPy beyond %d (%d degrees, noncentrality %d)', (x, degrees, noncentrality, wanted, tolerance) => {
    expect(Math.abs(noncentralChiSquareTail(x, degrees, noncentrality) / wanted - 1)).toBeLessThan(tolerance);
  });

  it('is the central one without noncentrality, and rises with it', () => {
    expect(noncentralChiSquareTail(9, 4, 0)).toBeCloseTo(chiSquareTail(9, 4), 14);
    expect([-1, 0].map((x) => noncentralChiSquareTail(x, 4, 3))).toEqual([1, 1]);
    expect(noncentralChiSquareTail(Infinity, 4, 3)).toBe(0);
    const tails = [0, 1, 5, 20, 80, 300].map((noncentrality) => noncentralChiSquareTail(40, 6, noncentrality));
    expect([...tails].sort((a, b) => a - b)).toEqual(tails);
  });

  // SciPy 1.17.1, optimize.brentq on stats.ncx2.sf.
  it.each([
    [30, 7, 0.025, 7.603125700931521],
    [30, 7, 0.975, 48.29803963068286],
    [46_000, 7, 0.025, 45157.13805026544],
  ])('is bounded by what was observed: %d, %d degrees, tail %d', (x, degrees, tail, wanted) => {
    expect(Math.abs(noncentralityAt(x, degrees, tail) / wanted - 1)).toBeLessThan(1e-8);
  });

  it('is bounded by 0 where even the central one goes so far', () => {
    expect(noncentralityAt(3, 7, 0.5)).toBe(0);
    expect(noncentralityAt(0, 7, 0.975)).toBe(0);
  });
});
