import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { NumericError, ZeroCellError } from '../errors';
import { assignBins, binOf, countBins } from './assignment';
import { fineEdgesOfCounts, fineEdges, shortestBetween } from './fine-classes';
import { Generator } from '../random/generator';
import { multinomial } from '../resampling/bootstrap';
import { informationValueInterval } from './information-value';
import { weightOfEvidence } from './weight-of-evidence';

const never = { amount: 0, when: 'never' } as const;
const zeroCell = { amount: 0.5, when: 'zero-cell' } as const;
const always = { amount: 0.5, when: 'always' } as const;

describe('weightOfEvidence', () => {
  it('is the log ratio of the shares, and its parts add up to the information value', () => {
    const { woe, parts, informationValue, smoothed } = weightOfEvidence([80, 20], [10, 30], never);
    expect(woe[0]).toBeCloseTo(Math.log(80 / 100 / (10 / 40)), 14);
    expect(woe[1]).toBeCloseTo(Math.log(20 / 100 / (30 / 40)), 14);
    expect(parts[0] + parts[1]).toBeCloseTo(informationValue, 14);
    expect(smoothed).toBe(false);
  });

  it('smooths only where asked, with totals that count the bins with rows', () => {
    expect(weightOfEvidence([80, 20], [10, 30], zeroCell).smoothed).toBe(false);
    const { woe, smoothed } = weightOfEvidence([80, 20, 0], [0, 40, 0], zeroCell);
    expect(smoothed).toBe(true);
    expect(woe[0]).toBeCloseTo(Math.log(80.5 / 101 / (0.5 / 41)), 14);
    // No rows: WOE 0 and not in K.
    expect(woe[2]).toBe(0);
    expect(weightOfEvidence([80, 20, 0], [10, 30, 0], always).woe[0]).toBeCloseTo(
      weightOfEvidence([80, 20], [10, 30], always).woe[0],
      14,
    );
  });

  it('names the bin and the side of a zero cell', () => {
    try {
      weightOfEvidence([5, 5, 5], [5, 0, 5], never);
      expect.unreachable();
    } catch (error) {
      expect(error).toBeInstanceOf(ZeroCellError);
      expect((error as ZeroCellError).where).toEqual({ bin: 1, side: 'bads' });
    }
    expect(() => weightOfEvidence([0, 5], [5, 5], { amount: 0, when: 'zero-cell' })).toThrow(ZeroCellError);
  });

  it('refuses a sample without goods or bads, NaN and negative counts', () => {
    expect(() => weightOfEvidence([1, 2], [0, 0], always)).toThrow(NumericError);
    expect(() => weightOfEvidence([NaN, 2], [1, 1], always)).toThrow(NumericError);
    expect(() => weightOfEvidence([-1, 2], [1, 1], always)).toThrow(NumericError);
    expect(() => weightOfEvidence([1, 2], [1], always)).toThrow(NumericError);
  });

  it('does not change with the scale of the weights, and mirrors with good and bad', () => {
    const cell = fc.integer({ min: 1, max: 1000 });
    fc.assert(
      fc.property(
        fc.array(fc.tuple(cell, cell), { minLength: 1, maxLength: 12 }),
        fc.double({ min: 0.01, max: 100, noNaN: true }),
        (bins, scale) => {
          const goods = bins.map(([g]) => g);
          const bads = bins.map(([, b]) => b);
          const own = weightOfEvidence(goods, bads, never);
          const scaled = weightOfEvidence(
            goods.map((g) => g * scale),
            bads,
            never,
          );
          const mirrored = weightOfEvidence(bads, goods, never);
          own.woe.forEach((value, i) => {
            expect(scaled.woe[i]).toBeCloseTo(value, 10);
            expect(mirrored.woe[i]).toBeCloseTo(-value, 10);
          });
          expect(own.informationValue).toBeGreaterThanOrEqual(0);
          expect(mirrored.informationValue).toBeCloseTo(own.informationValue, 10);
        },
      ),
    );
  });
});

describe('assignment', () => {
  it('closes a bin on the side that is asked for', () => {
    const edges = [25, 30, 37];
    expect([24.9, 25, 29, 30, 37, 99].map((x) => binOf(x, edges, 'left'))).toEqual([0, 1, 1, 2, 3, 3]);
    expect([24.9, 25, 29, 30, 37, 99].map((x) => binOf(x, edges, 'right'))).toEqual([0, 0, 1, 1, 2, 3]);
    expect([-Infinity, Infinity].map((x) => binOf(x, edges, 'left'))).toEqual([0, 3]);
  });

  it('is the number of edges passed, for any edges', () => {
    fc.assert(
      fc.property(
        fc.uniqueArray(fc.integer({ min: -50, max: 50 }), { maxLength: 20 }),
        fc.array(fc.integer({ min: -60, max: 60 })),
        (raw, values) => {
          const edges = raw.sort((a, b) => a - b);
          const left = assignBins(Float64Array.from(values), edges, 'left');
          const right = assignBins(Float64Array.from(values), edges, 'right');
          values.forEach((x, i) => {
            expect(left[i]).toBe(edges.filter((edge) => edge <= x).length);
            expect(right[i]).toBe(edges.filter((edge) => edge < x).length);
          });
        },
      ),
    );
  });

  it('refuses NaN with its row, and edges that are not ascending', () => {
    expect(() => assignBins(Float64Array.of(1, NaN), [0], 'left')).toThrow('row 1');
    expect(() => assignBins(Float64Array.of(1), [2, 2], 'left')).toThrow(NumericError);
    expect(() => assignBins(Float64Array.of(1), [NaN], 'left')).toThrow(NumericError);
  });

  it('counts rows plainly and classes by weight', () => {
    const counts = countBins([0, 1, 1], [1, 0, 1], 3, [2, 3, 4]);
    expect([[...counts.rows], [...counts.goods], [...counts.bads]]).toEqual([
      [1, 2, 0],
      [2, 4, 0],
      [0, 3, 0],
    ]);
    expect(() => countBins([3], [1], 3)).toThrow(NumericError);
  });
});

describe('fineEdges', () => {
  it('gives each value its class when there are few', () => {
    expect(fineEdges(Float64Array.of(3, 1, 2, 2, 1), 100)).toEqual([2, 3]);
    expect(fineEdges(Float64Array.of(7, 7), 100)).toEqual([]);
    expect(fineEdges(Float64Array.of(1.237, 1.81, 2.46, 9.9), 4)).toEqual([1.8, 2, 9]);
  });

  it('writes the shortest decimal that separates', () => {
    expect(shortestBetween(0.1, 0.30000000000000004)).toBe(0.3);
    expect(shortestBetween(-0.5, 3)).toBe(0);
    expect(shortestBetween(1234.4, 1234.6)).toBe(1234.6);
    expect(shortestBetween(1233.9, 1234.6)).toBe(1234);
    expect(shortestBetween(1e-9, 3e-9)).toBe(3e-9);
    expect(shortestBetween(-2000.2, -1999.7)).toBe(-2000);
  });

  it('separates as the values do, with classes of nearly equal size', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: -1e6, max: 1e6, noNaN: true }), { minLength: 1, maxLength: 300 }),
        fc.integer({ min: 1, max: 40 }),
        (values, count) => {
          const edges = fineEdges(Float64Array.from(values), count);
          expect(edges.length).toBeLessThan(count);
          edges.forEach((edge, i) => expect(i === 0 || edge > edges[i - 1]).toBe(true));
          const bins = assignBins(Float64Array.from(values), edges, 'left');
          // Every class has a value in it: an edge that separates nothing would leave one empty.
          expect(new Set(bins).size).toBe(edges.length + 1);
          if (new Set(values).size === values.length && values.length >= 2 * count) {
            const sizes = countBins(bins, new Uint8Array(values.length), edges.length + 1).rows;
            sizes.forEach((size) => expect(Math.abs(size - values.length / count)).toBeLessThanOrEqual(2));
          }
        },
      ),
      { numRuns: 200 },
    );
  });
});

describe('informationValueInterval', () => {
  const goods = [300, 250, 150];
  const bads = [30, 60, 110];

  it('holds the value and narrows with the sample', () => {
    const small = informationValueInterval(goods, bads);
    const large = informationValueInterval(goods.map((g) => g * 100), bads.map((b) => b * 100)); // prettier-ignore
    for (const { lower, informationValue, upper } of [small, large]) {
      expect(lower).toBeLessThan(informationValue);
      expect(upper).toBeGreaterThan(informationValue);
    }
    expect((large.upper - large.lower) / (small.upper - small.lower)).toBeCloseTo(0.1, 1);
    const wider = informationValueInterval(goods, bads, { level: 0.99 });
    expect(wider.lower).toBeLessThan(small.lower);
    expect(wider.upper).toBeGreaterThan(small.upper);
  });

  it('reaches down to 0 where nothing speaks against it, and counts no bin that nobody is in', () => {
    expect(informationValueInterval([100, 101, 99], [100, 99, 101]).lower).toBe(0);
    expect(informationValueInterval([...goods, 0], [...bads, 0])).toEqual(informationValueInterval(goods, bads));
    expect(informationValueInterval([500, 0], [50, 0])).toEqual({ informationValue: 0, lower: 0, upper: 0, standardError: 0 });
  });

  // Of 400 intervals at 95 %, 380 are expected to cover, with a standard deviation of 4.4; the approximation takes some more.
  it.each([
    [1000, 0],
    [1000, 0.2],
    [1000, 1.5],
    [4800, 0.1],
    [4800, 0.4],
    [24_000, 0.05],
    [24_000, 0.2],
    [24_000, 0.7],
    [100_000, 1],
  ])('covers the information value of the population as often as it says, %i rows, slope %d', (rows, slope) => {
    const shape = [-1, -0.6, -0.3, -0.1, 0.1, 0.3, 0.6, 1];
    const shares = (sign: number): number[] => shape.map((x) => Math.exp((sign * slope * x) / 2));
    const [g, b] = [shares(1), shares(-1)];
    const all = (values: readonly number[]): number => values.reduce((sum, one) => sum + one, 0);
    const truth = g.reduce(
      (sum, of, bin) => sum + (of / all(g) - b[bin] / all(b)) * Math.log(of / all(g) / (b[bin] / all(b))),
      0,
    );
    let covered = 0;
    for (let draw = 0; draw < 400; draw++) {
      const random = new Generator(rows, draw);
      const { lower, upper } = informationValueInterval(multinomial(random, 0.9 * rows, g), multinomial(random, 0.1 * rows, b));
      if (lower <= truth && truth <= upper) covered++;
    }
    expect(covered).toBeGreaterThanOrEqual(356);
    expect(covered).toBeLessThanOrEqual(397);
  });
});

describe('fineEdgesOfCounts', () => {
  it('is fineEdges of the repeated values', () => {
    fc.assert(
      fc.property(
        fc.array(fc.tuple(fc.double({ min: -50, max: 50, noNaN: true }), fc.integer({ min: 0, max: 9 })), {
          minLength: 1,
          maxLength: 60,
        }),
        fc.integer({ min: 1, max: 20 }),
        (cells, count) => {
          const repeated = cells.flatMap(([value, times]) => new Array<number>(times).fill(value));
          if (repeated.length === 0) {
            expect(() => fineEdgesOfCounts([1], [0], count)).toThrow('no known value');
            return;
          }
          const values = cells.map(([value]) => value);
          const times = cells.map(([, n]) => n);
          expect(fineEdgesOfCounts(values, times, count)).toEqual(fineEdges(Float64Array.from(repeated), count));
        },
      ),
    );
  });
});
