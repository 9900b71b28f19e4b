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

  it('does not depend on the unit in which weights are stated', () => {
    for (let seed = 1; seed <= 20; seed++) {
      const { goods, bads, rows } = drawn((at) => 1 - 1.5 * at, 100, seed);
      const plain = chooseTrend({ goods, bads, rows }, constraints, { folds: 5, seed: 1 });
      for (const unit of [0.01, 0.1, 0.5, 2, 10, 1000]) {
        const scaled = { goods: goods.map((count) => count * unit), bads: bads.map((count) => count * unit), rows, badRows: bads };
        const least = { ...constraints, smallestGoods: constraints.smallestGoods * unit, smallestBads: constraints.smallestBads * unit };
        const found = chooseTrend(scaled, least, { folds: 5, seed: 1 });
        expect(found.trend, `seed ${seed}, unit ${unit}`).toBe(plain.trend);
        found.deviances.forEach((deviance, i) => expect(deviance).toBeCloseTo(plain.deviances[i], 9));
      }
    }
  });

  it('draws rows: where bads weigh less than goods, it is as sure as its rows allow', () => {
    // A tenth of the goods was sampled and all of the bads: every good stands for ten.
    const { goods, bads, rows } = drawn((at) => 3 * at, 400, 3);
    const weighted = { goods: goods.map((count) => count * 10), bads, rows, badRows: bads };
    const found = chooseTrend(weighted, { ...constraints, smallestGoods: 100 }, { folds: 5, seed: 1 });
    expect(found.trend).toBe('rising');
    // Without the rows by outcome they are parted as the weights are: fewer bad rows than there were, and so other draws.
    expect(chooseTrend({ ...weighted, badRows: undefined }, { ...constraints, smallestGoods: 100 }, { folds: 5, seed: 1 }).deviances).not.toEqual(found.deviances);
  });

  it('keeps the smallest share of the training rows, whatever the rows weigh', () => {
    // Rows by class; a class of 4 % of the rows cannot stand alone, though it carries half of all weight.
    const rows = [480, 40, 480];
    const goods = [400, 2000, 100];
    const bads = [80, 500, 380];
    const badRows = [80, 8, 380];
    const shares = chooseTrend({ goods, bads, rows, badRows }, { ...constraints, smallestShare: 0.2 }, { folds: 5, seed: 4 });
    const alone = chooseTrend({ goods, bads, rows, badRows }, { ...constraints, smallestShare: 0 }, { folds: 5, seed: 4 });
    expect(shares.deviances).not.toEqual(alone.deviances);
    expect(() => chooseTrend({ goods, bads, rows, badRows: [1, NaN, 1] }, constraints, { folds: 5, seed: 4 })).toThrow('badRows');
  });
});
