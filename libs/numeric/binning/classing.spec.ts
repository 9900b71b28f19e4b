import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { classCategories } from './categories';
import { classNumeric, trendOf, type Constraints } from './classing';
import { weightOfEvidence } from './weight-of-evidence';

const open: Constraints = {
  smallestShare: 0,
  smallestGoods: 0,
  smallestBads: 0,
  mostBins: 8,
  smallestDifference: 0,
  trend: 'any',
};

interface Fine {
  goods: number[];
  bads: number[];
  rows: number[];
}

function merged(fine: Fine, cuts: readonly number[]) {
  const ends = [...cuts, fine.rows.length];
  const sums = (counts: number[]): number[] =>
    ends.map((end, b) => counts.slice(b === 0 ? 0 : ends[b - 1], end).reduce((x, y) => x + y, 0));
  return { goods: sums(fine.goods), bads: sums(fine.bads), rows: sums(fine.rows) };
}

/** Whether a set of cuts satisfies the constraints, written from their definition and not from the search. */
function allowed(fine: Fine, cuts: readonly number[], constraints: Constraints): boolean {
  const bins = merged(fine, cuts);
  const total = fine.rows.reduce((x, y) => x + y, 0);
  if (bins.rows.length > constraints.mostBins) return false;
  if (bins.goods.some((g) => g === 0 || g < constraints.smallestGoods)) return false;
  if (bins.bads.some((b) => b === 0 || b < constraints.smallestBads)) return false;
  if (bins.rows.some((n) => n / total < constraints.smallestShare - 1e-12)) return false;
  const woe = bins.goods.map((g, i) => Math.log(g / bins.bads[i]));
  const steps = woe.slice(1).map((value, i) => value - woe[i]);
  if (steps.some((step) => Math.abs(step) < constraints.smallestDifference)) return false;
  const rising = (part: number[]): boolean => part.every((step) => step >= 0);
  const falling = (part: number[]): boolean => part.every((step) => step <= 0);
  const turns = (first: (part: number[]) => boolean, then: (part: number[]) => boolean): boolean =>
    Array.from({ length: steps.length + 1 }, (_, k) => k).some((k) => first(steps.slice(0, k)) && then(steps.slice(k)));
  if (constraints.trend === 'rising') return rising(steps);
  if (constraints.trend === 'falling') return falling(steps);
  if (constraints.trend === 'one-peak') return turns(rising, falling);
  return constraints.trend === 'one-valley' ? turns(falling, rising) : true;
}

/** Largest information value over every set of cuts. */
function bruteForce(fine: Fine, constraints: Constraints): number {
  let best = 0;
  for (let mask = 0; mask < 2 ** (fine.rows.length - 1); mask++) {
    const cuts = Array.from({ length: fine.rows.length - 1 }, (_, k) => k + 1).filter((k) => mask & (1 << (k - 1)));
    if (!allowed(fine, cuts, constraints)) continue;
    const bins = merged(fine, cuts);
    best = Math.max(best, weightOfEvidence(bins.goods, bins.bads, { amount: 0, when: 'never' }).informationValue);
  }
  return best;
}

const fineClasses = fc
  .array(fc.tuple(fc.integer({ min: 0, max: 40 }), fc.integer({ min: 0, max: 25 })), { minLength: 1, maxLength: 10 })
  .map((cells): Fine => ({ goods: cells.map(([g]) => g), bads: cells.map(([, b]) => b), rows: cells.map(([g, b]) => g + b) }))
  .filter((fine) => fine.goods.some((g) => g > 0) && fine.bads.some((b) => b > 0));

const constraintSets = fc.record({
  smallestShare: fc.constantFrom(0, 0.05, 0.1, 0.25),
  smallestGoods: fc.constantFrom(0, 5, 20),
  smallestBads: fc.constantFrom(0, 5, 15),
  mostBins: fc.integer({ min: 1, max: 8 }),
  smallestDifference: fc.constantFrom(0, 0.05, 0.4),
  trend: fc.constantFrom<Constraints['trend']>('any', 'rising', 'falling', 'one-peak', 'one-valley'),
});

/** Deviance of the bad rates of the bins that cuts make, from its definition over rows. */
function devianceOf(fine: Fine, cuts: readonly number[]): number {
  const bins = merged(fine, cuts);
  return bins.goods.reduce((sum, goods, i) => {
    const rate = bins.bads[i] / (goods + bins.bads[i]);
    return sum - 2 * (goods * Math.log(1 - rate) + bins.bads[i] * Math.log(rate));
  }, 0);
}

const everyPartition = (classes: number): number[][] =>
  Array.from({ length: 2 ** (classes - 1) }, (_, mask) =>
    Array.from({ length: classes - 1 }, (_, k) => k + 1).filter((k) => mask & (1 << (k - 1))),
  );

describe('classNumeric', () => {
  it('is exactly as good as trying every set of cuts, by deviance as well', () => {
    let compared = 0;
    fc.assert(
      fc.property(fineClasses, constraintSets, (fine, constraints) => {
        const { cuts } = classNumeric(fine, { ...constraints, criterion: 'deviance' });
        const all = everyPartition(fine.rows.length).filter((one) => allowed(fine, one, constraints));
        if (all.length === 0) {
          expect(cuts).toEqual([]);
          return;
        }
        compared++;
        expect(allowed(fine, cuts, constraints)).toBe(true);
        const smallest = Math.min(...all.map((one) => devianceOf(fine, one)));
        // Sums of at most ten terms of a few hundred.
        expect(devianceOf(fine, cuts)).toBeCloseTo(smallest, 8);
      }),
      { numRuns: 400 },
    );
    expect(compared).toBeGreaterThan(100);
  });

  it('is never worse than any other partition of many fine classes, by either criterion', () => {
    const many = fc
      .array(fc.tuple(fc.integer({ min: 0, max: 60 }), fc.integer({ min: 0, max: 30 })), { minLength: 30, maxLength: 60 })
      .map((cells): Fine => ({
        goods: cells.map(([g]) => g),
        bads: cells.map(([, b]) => b),
        rows: cells.map(([g, b]) => g + b),
      }));
    const trials = fc.array(fc.array(fc.double({ min: 0, max: 1, noNaN: true }), { maxLength: 7 }), {
      minLength: 40,
      maxLength: 40,
    });
    let compared = 0;
    fc.assert(
      fc.property(
        many,
        trials,
        fc.constantFrom<Constraints['trend']>('any', 'rising', 'falling', 'one-peak', 'one-valley'),
        (fine, tried, trend) => {
          const constraints = { ...open, smallestShare: 0.02, trend };
          const iv = (cuts: readonly number[]): number => {
            const bins = merged(fine, cuts);
            return weightOfEvidence(bins.goods, bins.bads, { amount: 0, when: 'never' }).informationValue;
          };
          const byValue = classNumeric(fine, constraints).cuts;
          const byDeviance = classNumeric(fine, { ...constraints, criterion: 'deviance' }).cuts;
          for (const shares of tried) {
            const cuts = [...new Set(shares.map((share) => 1 + Math.floor(share * (fine.rows.length - 1))))]
              .filter((cut) => cut < fine.rows.length)
              .sort((a, b) => a - b);
            if (!allowed(fine, cuts, constraints)) continue;
            compared++;
            expect(iv(byValue)).toBeGreaterThanOrEqual(iv(cuts) - 1e-9);
            expect(devianceOf(fine, byDeviance)).toBeLessThanOrEqual(devianceOf(fine, cuts) + 1e-7);
          }
        },
      ),
      { numRuns: 60 },
    );
    expect(compared).toBeGreaterThan(200);
  });

  it('is exactly as good as trying every set of cuts', () => {
    fc.assert(
      fc.property(fineClasses, constraintSets, (fine, constraints) => {
        const { cuts, informationValue } = classNumeric(fine, constraints);
        expect(informationValue).toBeCloseTo(bruteForce(fine, constraints), 9);
        if (cuts.length > 0) expect(allowed(fine, cuts, constraints)).toBe(true);
      }),
      { numRuns: 400 },
    );
  });

  it('does not depend on the scale of the weights', () => {
    fc.assert(
      fc.property(fineClasses, (fine) => {
        const half = { ...fine, goods: fine.goods.map((g) => g / 2), bads: fine.bads.map((b) => b / 2) };
        expect(classNumeric(half, open).informationValue).toBeCloseTo(classNumeric(fine, open).informationValue, 9);
      }),
    );
  });

  it('prefers fewer bins where more bring nothing', () => {
    const same = { goods: [10, 10, 10], bads: [5, 5, 5], rows: [15, 15, 15] };
    expect(classNumeric(same, open)).toEqual({ cuts: [], informationValue: 0, trend: 'flat', worth: 0 });
  });

  it('gives one bin when nothing satisfies the constraints', () => {
    const { cuts, trend } = classNumeric({ goods: [3, 4], bads: [2, 1], rows: [5, 5] }, { ...open, smallestBads: 20 });
    expect([cuts, trend]).toEqual([[], 'flat']);
  });

  it('classes a hundred fine classes at once', () => {
    const goods = Array.from({ length: 100 }, (_, i) => 150 + Math.round(60 * Math.sin(i / 12)));
    const bads = Array.from({ length: 100 }, (_, i) => 40 + Math.round(25 * Math.cos(i / 30)));
    const rows = goods.map((g, i) => g + bads[i]);
    const constraints: Constraints = {
      smallestShare: 0.05,
      smallestGoods: 20,
      smallestBads: 20,
      mostBins: 8,
      smallestDifference: 0.05,
      trend: 'rising',
    };
    const { cuts, trend } = classNumeric({ goods, bads, rows }, constraints);
    expect(trend).toBe('rising');
    expect(allowed({ goods, bads, rows }, cuts, constraints)).toBe(true);
  });

  it('names trends', () => {
    expect([[1], [1, 2], [2, 2, 1], [1, 3, 2], [2, 1, 3], [1, 3, 2, 4]].map(trendOf)).toEqual([
      'flat',
      'rising',
      'falling',
      'one-peak',
      'one-valley',
      'mixed',
    ]);
  });
});

describe('classCategories', () => {
  const category = (goods: number, bads: number) => ({ goods, bads, rows: goods + bads });

  it('orders by bad rate and pools what is rare', () => {
    const categories = [category(60, 40), category(95, 5), category(1, 0), category(90, 12), category(0, 2), category(50, 50)];
    const { groups } = classCategories(categories, { ...open, smallestShare: 0.1, mostBins: 3, smallestDifference: 0.1 });
    expect(groups.flat().sort()).toEqual([0, 1, 2, 3, 4, 5]);
    const rates = groups.map(
      (group) => group.reduce((sum, i) => sum + categories[i].bads, 0) / group.reduce((sum, i) => sum + categories[i].rows, 0),
    );
    rates.slice(1).forEach((rate, g) => expect(rate).toBeGreaterThan(rates[g]));
    expect(groups.find((group) => group.includes(2))).toContain(4);
  });

  it('is as good as every grouping of a few categories', () => {
    const cell = fc.tuple(fc.integer({ min: 5, max: 60 }), fc.integer({ min: 5, max: 60 }));
    fc.assert(
      fc.property(fc.array(cell, { minLength: 2, maxLength: 6 }), fc.integer({ min: 1, max: 3 }), (cells, mostBins) => {
        const categories = cells.map(([g, b]) => category(g, b));
        let best = 0;
        for (let code = 0; code < mostBins ** cells.length; code++) {
          const goods = new Float64Array(mostBins);
          const bads = new Float64Array(mostBins);
          categories.forEach(({ goods: g, bads: b }, i) => {
            const group = Math.floor(code / mostBins ** i) % mostBins;
            goods[group] += g;
            bads[group] += b;
          });
          best = Math.max(best, weightOfEvidence(goods, bads, { amount: 0, when: 'never' }).informationValue);
        }
        expect(classCategories(categories, { ...open, mostBins }).informationValue).toBeCloseTo(best, 9);
      }),
      { numRuns: 60 },
    );
  });

  it('is as good as every grouping along the order of risk under every constraint, by either criterion', () => {
    const cell = fc.tuple(fc.integer({ min: 8, max: 60 }), fc.integer({ min: 8, max: 60 }));
    let compared = 0;
    let forbidding = 0;
    fc.assert(
      fc.property(
        fc.array(cell, { minLength: 2, maxLength: 7 }),
        constraintSets,
        fc.constantFrom<'information value' | 'deviance'>('information value', 'deviance'),
        (cells, limits, criterion) => {
          const constraints: Constraints = { ...limits, trend: 'any', criterion };
          const categories = cells.map(([g, b]) => category(g, b));
          const total = categories.reduce((sum, { rows }) => sum + rows, 0);
          // None is rare, so that each stands in the order by a rate of its own.
          fc.pre(categories.every(({ rows }) => rows >= 0.2 * constraints.smallestShare * total));
          const order = categories.map((_, i) => i).sort((a, b) => categories[a].bads / categories[a].rows - categories[b].bads / categories[b].rows || a - b);
          const fine: Fine = {
            goods: order.map((i) => categories[i].goods),
            bads: order.map((i) => categories[i].bads),
            rows: order.map((i) => categories[i].rows),
          };
          const worth = (cuts: readonly number[]): number => {
            if (criterion === 'deviance') return -devianceOf(fine, cuts);
            const { goods, bads } = merged(fine, cuts);
            return weightOfEvidence(goods, bads, { amount: 0, when: 'never' }).informationValue;
          };
          const { groups } = classCategories(categories, constraints);
          expect(groups.flat().sort((a, b) => a - b)).toEqual(categories.map((_, i) => i));
          const cuts = groups.slice(0, -1).map((_, g) => groups.slice(0, g + 1).flat().length);
          // Each group is a stretch of the order.
          groups.forEach((group, g) => {
            const stretch = order.slice(g === 0 ? 0 : cuts[g - 1], cuts[g] ?? order.length);
            expect([...stretch].sort((a, b) => a - b)).toEqual(group);
          });
          const every = everyPartition(order.length);
          const sound = every.filter((one) => allowed(fine, one, constraints));
          if (sound.length === 0) {
            expect(cuts).toEqual([]);
            return;
          }
          compared++;
          if (sound.length < every.length) forbidding++;
          expect(allowed(fine, cuts, constraints)).toBe(true);
          // Sums of at most seven terms of a few hundred.
          expect(worth(cuts)).toBeCloseTo(Math.max(...sound.map(worth)), 8);
        },
      ),
      { numRuns: 400 },
    );
    expect(compared).toBeGreaterThan(150);
    expect(forbidding).toBeGreaterThan(100);
  });

  it('keeps to the order of risk where a smallest count would let another grouping gain a little', () => {
    const categories = [category(13, 34), category(9, 10), category(16, 41), category(31, 15)];
    const { groups, informationValue } = classCategories(categories, { ...open, smallestBads: 15, mostBins: 3 });
    expect(groups).toEqual([[1, 3], [2], [0]]);
    // Category 1 alone has too few bads. In one group with 0, over the head of 2, it would gain 0.0005.
    const other = weightOfEvidence([31, 16, 22], [15, 41, 44], { amount: 0, when: 'never' }).informationValue;
    expect(other - informationValue).toBeGreaterThan(0);
    expect(other - informationValue).toBeLessThan(0.001);
  });

  it('takes no category at all', () => expect(classCategories([], open)).toEqual({ groups: [], informationValue: 0 }));
});
