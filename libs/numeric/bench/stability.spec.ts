import { describe, expect, it } from 'vitest';
import { populationStability } from '../metrics/stability-index';
import { readingInterval } from './interval';
import { readBench } from './reading';
import { benchStability, isUnstable } from './stability';
import type { FineClasses } from './types';
import { benchWarnings } from './warnings';

const counts = (rows: number[], rate = 0.2) => ({
  rows,
  goods: rows.map((n) => n * (1 - rate)),
  bads: rows.map((n) => n * rate),
});
const fine: FineClasses = {
  kind: 'numeric', edges: [10, 20, 30], closed: 'left', range: [0, 40], categories: [], special: ['none'],
  development: { rows: [500, 400, 300, 200, 100, 0], goods: [450, 340, 240, 150, 70, 0], bads: [50, 60, 60, 50, 30, 0] },
  holdOut: counts([240, 200, 160, 100, 50, 0]),
  outOfTime: counts([50, 60, 150, 300, 50, 0]),
}; // prettier-ignore
const bins = { kind: 'numeric', edges: [10, 30], special: ['own'], missing: 'own' } as const;
const limits = { smallestShare: 0.05, smallestGoods: 20, smallestBads: 10 };

describe('stability on the bench', () => {
  it('is the index over the bins as they are, by rows', () => {
    const stability = benchStability(fine, bins);
    expect(stability.holdOut).toBe(populationStability([500, 700, 200, 100, 0], [240, 360, 100, 50, 0]));
    expect(stability.outOfTime).toBe(populationStability([500, 700, 200, 100, 0], [50, 210, 300, 50, 0]));
    expect(readBench(fine, bins).stability).toEqual(stability);
    expect(benchStability({ ...fine, outOfTime: null }, bins).outOfTime).toBeNull();
  });

  it('adds half a row to every bin where one is empty on one side, and says which', () => {
    const holdOut = counts([240, 200, 160, 0, 50, 0]);
    expect(benchStability({ ...fine, holdOut }, bins).holdOut).toBe(
      populationStability([500, 700, 200, 100, 0], [240, 360, 0, 50, 0], 0.5),
    );
    // Most of out-of-time carries a code that development does not know.
    const outOfTime = counts([50, 60, 40, 30, 420, 0]);
    const development = { rows: [500, 400, 300, 200, 0, 0], goods: [450, 340, 240, 150, 0, 0], bads: [50, 60, 60, 50, 0, 0] };
    const reading = readBench({ ...fine, development, outOfTime }, bins);
    expect(reading.stability.outOfTime).toBeGreaterThan(3);
    const warning = benchWarnings(reading, limits).find(({ code }) => code === 'unstable-out-of-time');
    expect(warning?.message).toContain('a large change');
    expect(warning?.message).toContain('none: no row of development; half a row is added to every bin');
    expect(warning?.bins).toEqual([3]);
  });

  it('cannot be told without rows', () => {
    expect(benchStability({ ...fine, holdOut: counts([0, 0, 0, 0, 0, 0]) }, bins).holdOut).toBeNull();
  });

  it('takes unseen categories that stay neutral as a class of their own', () => {
    const home: FineClasses = {
      kind: 'categorical', edges: [], closed: 'left', range: null, categories: ['rent', 'own'], special: [],
      development: counts([100, 100, 0, 1]), holdOut: counts([100, 100, 0, 50]), outOfTime: null,
    }; // prettier-ignore
    const apart = { kind: 'categorical', groups: [['rent'], ['own']], special: [], missing: 'own', unseen: 'neutral' } as const;
    expect(benchStability(home, apart).holdOut).toBe(populationStability([100, 100, 0, 1], [100, 100, 0, 50]));
    expect(benchStability(home, { ...apart, unseen: 1 }).holdOut).toBe(populationStability([100, 101, 0], [100, 150, 0]));
  });

  it('warns of what is a change and no chance', () => {
    const codes = benchWarnings(readBench(fine, bins), limits).map(({ code }) => code);
    expect(codes).toContain('unstable-out-of-time');
    expect(codes).not.toContain('unstable-in-hold-out');
    // 0.12 among millions is a change; among forty rows it is what chance does.
    expect(isUnstable(0.12, 1e6, 1e6, 8)).toBe(true);
    expect(isUnstable(0.12, 40, 40, 8)).toBe(false);
    expect(isUnstable(0.09, 1e6, 1e6, 8)).toBe(false);
  });

  it('gives the same bins the same interval, around their information value', () => {
    const reading = readBench(fine, bins);
    const interval = readingInterval(reading)!;
    expect(readingInterval(reading)).toEqual(interval);
    expect(interval.lower).toBeLessThan(reading.informationValue);
    expect(interval.upper).toBeGreaterThan(reading.informationValue);
    expect(readingInterval(readBench({ ...fine, development: counts([500, 400, 300, 200, 100, 0], 0) }, bins))).toBeNull();
  });
});
