import { describe, expect, it } from 'vitest';
import { Generator } from '../random/generator';
import { chooseTrend, triedTrends } from './choose-trend';
import type { Constraints } from './classing';

const constraints: Constraints = {
  smallestShare: 0.05, smallestGoods: 10, smallestBads: 10, mostBins: 8, smallestDifference: 0, trend: 'any',
}; // prettier-ignore

/** Counts of 40 fine classes whose log odds follow a shape. */
function drawn(shape: (at: number) => number, perClass: number, seed: number) {
  const random = new Generator(seed);
  const rates = Array.from({ length: 40 }, (_, i) => 1 / (1 + Math.exp(shape(i / 39))));
  const bads = rates.map((rate) => random.binomial(perClass, rate));
  return { goods: bads.map((count) => perClass - count), bads, rows: bads.map(() => perClass) };
}

describe('the trend chosen by cross-validation', () => {
  it.each([
    ['rising', (at: number) => 3 * at],
    ['falling', (at: number) => 2 - 3 * at],
    ['one-peak', (at: number) => 3 - 14 * (at - 0.5) ** 2],
    ['one-valley', (at: number) => 14 * (at - 0.5) ** 2],
  ] as const)('is %s where risk is so', (trend, shape) => {
    const found = chooseTrend(drawn(shape, 400, 3), constraints, { folds: 5, seed: 1 });
    expect(found.trend).toBe(trend);
    expect(found.deviances).toHaveLength(triedTrends.length);
    expect(Math.min(...found.deviances)).toBe(found.deviances[triedTrends.indexOf(trend)]);
  });

  it('is any where risk goes up and down and up', () => {
    expect(
      chooseTrend(
        drawn((at) => 2 * Math.sin(at * 12), 1000, 5),
        constraints,
        { folds: 5, seed: 1 },
      ).trend,
    ).toBe('any');
  });

  it('is the same for the same seed, another for another', () => {
    const fine = drawn((at) => 3 * at, 200, 8);
    const first = chooseTrend(fine, constraints, { folds: 5, seed: 2 });
    expect(chooseTrend(fine, constraints, { folds: 5, seed: 2 })).toEqual(first);
    expect(chooseTrend(fine, constraints, { folds: 5, seed: 3 }).deviances).not.toEqual(first.deviances);
    expect(() => chooseTrend(fine, constraints, { folds: 1, seed: 1 })).toThrow('two folds');
  });
});
