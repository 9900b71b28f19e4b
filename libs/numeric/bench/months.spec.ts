import { describe, expect, it } from 'vitest';
import { weightOfEvidence } from '../binning/weight-of-evidence';
import { Generator } from '../random/generator';
import { monthlyDrift, quarterOf, readPeriods, type MonthCounts } from './months';
import { readBench } from './reading';
import type { FineClasses } from './types';
import { benchWarnings, largeMonthlyDrift } from './warnings';

/** Four fine classes, missing; the counts themselves are not looked at here. */
const nothing = { rows: [0, 0, 0, 0, 0], goods: [0, 0, 0, 0, 0], bads: [0, 0, 0, 0, 0] };
const fine: FineClasses = {
  kind: 'numeric', edges: [10, 20, 30], closed: 'left', range: [0, 40], categories: [], special: [],
  development: nothing, holdOut: nothing, outOfTime: null,
}; // prettier-ignore
const bins = { kind: 'numeric', edges: [10, 20, 30], special: [], missing: 'own' } as const;
const monthOf = (index: number): string => `20${21 + Math.floor(index / 12)}-${String((index % 12) + 1).padStart(2, '0')}`;

/** Months whose level of risk wanders freely, and in which the log odds of each bin stand off by a normal deviation. */
function months(seed: number, count: number, rows: number, deviation: number): MonthCounts[] {
  const random = new Generator(seed);
  const normal = (): number => Math.sqrt(-2 * Math.log(1 - random.uniform())) * Math.cos(2 * Math.PI * random.uniform());
  return Array.from({ length: count }, (_, index) => {
    const level = 0.4 * normal();
    const bads = [-3, -2.5, -2, -1.5, -2.2].map((logOdds) => {
      const p = 1 / (1 + Math.exp(-(logOdds + level + deviation * normal())));
      let drawn = 0;
      for (let row = 0; row < rows; row++) if (random.uniform() < p) drawn++;
      return drawn;
    });
    return { month: monthOf(index), rows: bads.map(() => rows), goods: bads.map((bad) => rows - bad), bads };
  });
}

describe('bins by month', () => {
  const month = (name: string, goods: number[], bads: number[]): MonthCounts => ({
    month: name,
    rows: goods.map((good, slot) => good + bads[slot]),
    goods,
    bads,
  });
  const counts = {
    development: [
      month('2023-01', [90, 80, 70, 60, 8], [10, 20, 30, 40, 2]),
      month('2023-03', [45, 40, 35, 30, 4], [5, 10, 15, 20, 1]),
    ],
    holdOut: [month('2023-02', [30, 30, 30, 30, 0], [10, 10, 10, 10, 0])],
    outOfTime: null,
  };

  it('sums months to quarters and says WOE of their own counts', () => {
    const read = readPeriods(fine, { ...bins, edges: [20] }, counts, 'quarter');
    expect(read.map(({ label, partition }) => [label, partition])).toEqual([
      ['2023 Q1', 'development'],
      ['2023 Q1', 'holdOut'],
    ]);
    const goods = [255, 195, 12];
    const bads = [45, 105, 3];
    expect(read[0].cells.map((cell) => [cell.goods, cell.bads])).toEqual(goods.map((good, bin) => [good, bads[bin]]));
    const { woe } = weightOfEvidence(goods, bads, { amount: 0.5, when: 'zero-cell' });
    expect(read[0].cells.map((cell) => cell.woe)).toEqual([...woe]);
    // The delta method by hand for the first bin: 462 goods and 153 bads in all.
    const error = Math.sqrt(1 / 255 - 1 / 462 + 1 / 45 - 1 / 153);
    expect(read[0].cells[0].woeUpper! - read[0].cells[0].woe!).toBeCloseTo(1.959963984540054 * error, 12);
    expect(['2023-01', '2023-12', '2024-04'].map(quarterOf)).toEqual(['2023 Q1', '2023 Q4', '2024 Q2']);
  });

  it('marks small cells and gives them no limits of WOE', () => {
    const [first] = readPeriods(fine, bins, counts, 'month');
    expect(first.cells.map(({ small }) => small)).toEqual([false, false, false, false, true]);
    expect(first.cells[4]).toMatchObject({ rows: 10, woeLower: null, woeUpper: null });
    const empty = readPeriods(fine, bins, counts, 'month').find(({ partition }) => partition === 'holdOut')!.cells[4];
    expect(empty).toMatchObject({ rows: 0, badRate: null, woe: null, small: true });
  });

  it('weights are no more observations than rows', () => {
    const heavy = { ...counts.development[0], goods: [900, 800, 700, 600, 80], bads: [100, 200, 300, 400, 20] };
    const [plain, weighted] = [counts.development[0], heavy].map(
      (one) => readPeriods(fine, bins, { ...counts, development: [one] }, 'month')[0],
    );
    expect(weighted.cells.map(({ small }) => small)).toEqual(plain.cells.map(({ small }) => small));
    expect(weighted.cells[1].woeUpper).toBeCloseTo(plain.cells[1].woeUpper!, 12);
  });

  it('says nothing of out-of-time while it is covered', () => {
    expect(readPeriods(fine, bins, counts, 'month').map(({ partition }) => partition)).toEqual([
      'development',
      'development',
      'holdOut',
    ]);
    expect(readPeriods(fine, bins, { ...counts, outOfTime: counts.holdOut }, 'month').at(-1)?.partition).toBe('outOfTime');
  });
});

describe('how far WOE moves between months', () => {
  const drift = (seed: number, rows: number, deviation: number) =>
    monthlyDrift(fine, bins, { development: months(seed, 30, rows, deviation), holdOut: [] })!;

  it('is about nothing where only the level of risk moves, with months of few bads too', () => {
    // 200 samples without drift: the one-sided 5 % point is passed by about 10 of them; the band is four standard errors of a count of 200 wide.
    for (const rows of [40, 400]) {
      const seen = Array.from({ length: 200 }, (_, seed) => drift(seed + 1, rows, 0));
      const passed = seen.filter(({ beyondChance }) => beyondChance).length;
      expect(passed).toBeLessThan(10 + 4 * Math.sqrt(9.5));
      const mean = seen.reduce((sum, one) => sum + one.statistic / one.freedom, 0) / seen.length;
      // Pearson's statistic has its degrees of freedom as mean; the error of a mean of 200 with 116 degrees of freedom is 0.0093.
      expect(Math.abs(mean - 1)).toBeLessThan(0.04);
    }
  });

  it('finds the deviation that the samples were drawn with', () => {
    for (const deviation of [0.2, 0.4]) {
      const seen = Array.from({ length: 40 }, (_, seed) => drift(seed + 1, 400, deviation).deviation ** 2);
      const mean = Math.sqrt(seen.reduce((sum, one) => sum + one, 0) / seen.length);
      // 40 samples of 150 cells: the error of the mean variance is below a twentieth of it; moments on a curved scale take a little more.
      expect(Math.abs(mean / deviation - 1)).toBeLessThan(0.1);
    }
  });

  it('does not depend on the order of months, nor on which partition a row lies in', () => {
    const drawn = months(7, 24, 300, 0.3);
    const whole = monthlyDrift(fine, bins, { development: drawn, holdOut: [] })!;
    const half = (one: MonthCounts): MonthCounts => ({
      month: one.month,
      rows: one.rows.map((n) => n / 2),
      goods: one.goods.map((n) => n / 2),
      bads: one.bads.map((n) => n / 2),
    });
    const parted = monthlyDrift(fine, bins, { development: drawn.map(half).reverse(), holdOut: drawn.map(half) })!;
    expect(parted.deviation).toBeCloseTo(whole.deviation, 9);
    expect(parted.months).toBe(24);
  });

  it('is Pearson’s statistic of a two by two table, worked by hand', () => {
    const one = (month: string, bads: [number, number]): MonthCounts => ({
      month,
      rows: [100, 100, 0, 0, 0],
      goods: [100 - bads[0], 100 - bads[1], 0, 0, 0],
      bads: [...bads, 0, 0, 0],
    });
    // Levels of months and bins equal by symmetry: every cell expects 20 of 100, and 10 more or less give 100 / 16 in each of four.
    const seen = monthlyDrift(fine, bins, { development: [one('2023-01', [10, 30]), one('2023-02', [30, 10])], holdOut: [] })!;
    expect(seen.freedom).toBe(1);
    expect(seen.statistic).toBeCloseTo(25, 9);
    expect(seen.deviation).toBeCloseTo(Math.sqrt(24 / (64 / 4)), 9);
  });

  it('is warned of where it is large and beyond chance, and not otherwise', () => {
    const sums = (side: 'rows' | 'goods' | 'bads', drawn: readonly MonthCounts[]) =>
      drawn.reduce((total, month) => total.map((value, slot) => value + month[side][slot]), [0, 0, 0, 0, 0]);
    const limits = { smallestShare: 0, smallestGoods: 0, smallestBads: 0 };
    const warned = (drawn: readonly MonthCounts[]) => {
      const development = { rows: sums('rows', drawn), goods: sums('goods', drawn), bads: sums('bads', drawn) };
      const reading = readBench({ ...fine, development }, bins);
      return benchWarnings(reading, limits, monthlyDrift(fine, bins, { development: drawn, holdOut: [] }));
    };
    const drawn = months(11, 30, 400, 0.5);
    const seen = monthlyDrift(fine, bins, { development: drawn, holdOut: [] })!;
    expect(seen.deviation).toBeGreaterThan(largeMonthlyDrift);
    expect(warned(drawn).find(({ code }) => code === 'unstable-by-month')?.message).toBe(
      `WOE moves from month to month by ±${seen.deviation.toFixed(2)} beyond chance, over 30 months (from ±0.20 to be looked at).`,
    );
    expect(warned(months(11, 30, 400, 0)).map(({ code }) => code)).not.toContain('unstable-by-month');
    // Beyond chance with so many rows, but small.
    const small = months(12, 30, 4000, 0.1);
    expect(monthlyDrift(fine, bins, { development: small, holdOut: [] })!.beyondChance).toBe(true);
    expect(warned(small).map(({ code }) => code)).not.toContain('unstable-by-month');
    // Large in few rows, but no more than chance.
    const few = Array.from({ length: 40 }, (_, seed) => months(seed + 1, 6, 30, 0)).find((one) => {
      const { deviation, beyondChance } = monthlyDrift(fine, bins, { development: one, holdOut: [] })!;
      return deviation >= largeMonthlyDrift && !beyondChance;
    })!;
    expect(warned(few).map(({ code }) => code)).not.toContain('unstable-by-month');
  });

  it('cannot be told from one month, one bin, or one outcome', () => {
    const drawn = months(3, 6, 100, 0.2);
    expect(monthlyDrift(fine, bins, { development: drawn.slice(0, 1), holdOut: [] })).toBeNull();
    expect(monthlyDrift(fine, { ...bins, edges: [], missing: 0 }, { development: drawn, holdOut: [] })).toBeNull();
    const good = drawn.map((month) => ({ ...month, goods: month.rows, bads: month.rows.map(() => 0) }));
    expect(monthlyDrift(fine, bins, { development: good, holdOut: null })).toBeNull();
  });
});
