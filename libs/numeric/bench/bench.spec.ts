import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { auc } from '../metrics/discrimination';
import { weightOfEvidence } from '../binning/weight-of-evidence';
import {
  addCut,
  benchWarnings,
  binLabels,
  binOfSlots,
  edgeBeside,
  giniOfBins,
  groupCategories,
  mergeGroups,
  mergeNumeric,
  moveCut,
  moveMissing,
  moveSpecial,
  readBench,
  reversedBins,
  riskOrder,
  splitGroup,
  splitNumeric,
  type CategoricalBins,
  type FineClasses,
  type NumericBins,
} from './index';

const limits = { smallestShare: 0.05, smallestGoods: 20, smallestBads: 10 };

/** Five fine classes cut at 10, 20, 30, 40, one special code, missing. */
const fine: FineClasses = {
  kind: 'numeric',
  edges: [10, 20, 30, 40],
  closed: 'left',
  range: [1, 55],
  categories: [],
  special: ['no record'],
  development: {
    rows: [100, 100, 100, 100, 100, 40, 60],
    goods: [92, 88, 80, 74, 66, 30, 50],
    bads: [8, 12, 20, 26, 34, 10, 10],
  },
  holdOut: { rows: [50, 50, 50, 50, 50, 20, 30], goods: [47, 46, 39, 36, 29, 15, 25], bads: [3, 4, 11, 14, 21, 5, 5] },
  outOfTime: null,
};
const bins: NumericBins = { kind: 'numeric', edges: [20, 30], special: ['own'], missing: 'own' };

const homes: FineClasses = {
  kind: 'categorical',
  edges: [],
  closed: 'left',
  range: null,
  categories: ['rent', 'owner', 'parents', 'other'],
  special: [],
  development: { rows: [200, 150, 80, 20, 10, 0], goods: [150, 140, 62, 12, 8, 0], bads: [50, 10, 18, 8, 2, 0] },
  holdOut: { rows: [100, 70, 40, 10, 5, 3], goods: [75, 66, 31, 6, 4, 2], bads: [25, 4, 9, 4, 1, 1] },
  outOfTime: null,
};
const homeBins: CategoricalBins = {
  kind: 'categorical',
  groups: [['owner'], ['parents', 'rent'], ['other']],
  special: [],
  missing: 2,
  unseen: 'neutral',
};

describe('bins from fine classes', () => {
  it('orders bins as the specification does: cuts, own special codes, missing', () => {
    expect([...binOfSlots(fine, bins)]).toEqual([0, 0, 1, 2, 2, 3, 4]);
    expect(binLabels(fine, bins)).toEqual(['under 20', '20 to under 30', '30 and over', 'no record', 'missing']);
    expect([...binOfSlots(fine, { ...bins, special: [1], missing: 0 })]).toEqual([0, 0, 1, 2, 2, 1, 0]);
  });

  it('refuses a cut inside a fine class, wherever it lies', () => {
    expect(() => binOfSlots(fine, { ...bins, edges: [25] })).toThrow('inside a fine class');
    expect(() => binOfSlots(fine, { ...bins, edges: [20, 50] })).toThrow('inside a fine class');
    expect(() => binOfSlots(fine, { ...bins, edges: [5] })).toThrow('inside a fine class');
  });

  it('leaves unseen categories outside unless they join a group', () => {
    expect([...binOfSlots(homes, homeBins)]).toEqual([1, 0, 1, 2, 2, -1]);
    expect(readBench(homes, homeBins).totals.holdOut?.outside).toBe(3);
    expect([...binOfSlots(homes, { ...homeBins, unseen: 1 })]).toEqual([1, 0, 1, 2, 2, 1]);
  });
});

describe('what the bins say', () => {
  const reading = readBench(fine, bins);

  it('equals weight of evidence of the summed counts', () => {
    const expected = weightOfEvidence([180, 80, 140, 30, 50], [20, 20, 60, 10, 10], { amount: 0.5, when: 'zero-cell' });
    expect(reading.informationValue).toBe(expected.informationValue);
    expect(reading.bins.map((bin) => bin.figures.development?.woe)).toEqual([...expected.woe]);
    expect(reading.bins.map((bin) => bin.figures.development?.part)).toEqual([...expected.parts]);
  });

  it('has the Gini of the AUC over single rows', () => {
    const woe = reading.bins.map((bin) => bin.figures.development?.woe ?? 0);
    const rows: { woe: number; good: number }[] = [];
    reading.bins.forEach(({ figures: { development } }, bin) => {
      for (let i = 0; i < (development?.goods ?? 0); i++) rows.push({ woe: woe[bin], good: 1 });
      for (let i = 0; i < (development?.bads ?? 0); i++) rows.push({ woe: woe[bin], good: 0 });
    });
    const area = auc(
      Float64Array.from(rows, (row) => row.woe),
      Uint8Array.from(rows, (row) => row.good),
    );
    expect(reading.gini).toBeCloseTo(2 * area - 1, 12);
    expect(giniOfBins([90, 10], [10, 90], [2, -2])).toBeCloseTo(0.8, 12);
  });

  it('shares add up and the interval holds the bad rate', () => {
    const development = reading.bins.map((bin) => bin.figures.development!);
    expect(development.reduce((sum, bin) => sum + bin.share, 0)).toBeCloseTo(1, 12);
    for (const bin of development) {
      expect(bin.lower).toBeLessThan(bin.badRate!);
      expect(bin.upper).toBeGreaterThan(bin.badRate!);
      expect(bin.logOddsLower).toBeLessThan(bin.logOdds!);
      expect(bin.logOddsUpper).toBeGreaterThan(bin.logOdds!);
    }
    expect(reading.missingShare).toBeCloseTo(60 / 600, 12);
    expect(reading.trend).toBe('falling');
  });

  it('says nothing of out-of-time while it is covered', () => {
    expect(reading.totals.outOfTime).toBeNull();
    expect(reading.bins.every((bin) => bin.figures.outOfTime === null)).toBe(true);
  });

  it('a partition without bads has no WOE and is no error', () => {
    const none = { rows: [1, 0, 0, 0, 0, 0, 0], goods: [1, 0, 0, 0, 0, 0, 0], bads: [0, 0, 0, 0, 0, 0, 0] };
    const seen = readBench({ ...fine, holdOut: none }, bins);
    expect(seen.totals.holdOut).toMatchObject({ informationValue: null, gini: null });
    expect(seen.bins[0].figures.holdOut).toMatchObject({ rows: 1, badRate: 0, woe: null });
    expect(seen.bins[1].figures.holdOut).toMatchObject({ rows: 0, badRate: null, logOdds: null });
  });
});

describe('warnings', () => {
  const codes = (of: FineClasses, with_: NumericBins): string[] =>
    benchWarnings(readBench(of, with_), limits).map((warning) => warning.code);

  it('finds nothing in sound bins', () => expect(codes(fine, bins)).toEqual([]));

  it('names small bins', () => {
    const warning = benchWarnings(readBench(fine, { ...bins, edges: [10, 20, 30] }), limits)[0];
    expect(warning).toMatchObject({ code: 'small-bin', bins: [0] });
    expect(warning.message).toContain('under 10');
  });

  it('names zero cells and a turn of the trend', () => {
    const turned = {
      ...fine,
      development: { ...fine.development, goods: [92, 88, 80, 74, 100, 30, 60], bads: [8, 12, 20, 26, 0, 10, 0] },
    };
    const found = benchWarnings(readBench(turned, { ...bins, edges: [20, 40] }), limits);
    expect(found.map((warning) => warning.code)).toEqual([
      'small-bin',
      'zero-cell',
      'not-monotone',
      'reversed-in-hold-out',
      'high-information-value',
    ]);
    expect(found[1].bins).toEqual([2, 4]);
    expect(found[1].message).toBe(
      '40 and over has no bad; missing has no bad: for WOE, 0.5 is added to goods and bads of each bin.',
    );
    const more = benchWarnings(readBench(turned, { ...bins, edges: [20, 40] }, { amount: 2, when: 'zero-cell' }), limits);
    expect(more[1].message).toContain('for WOE, 2 is added');
  });

  it('says when everything lies in one bin', () => {
    const constant = { rows: [100, 0, 0, 0, 0, 0, 0], goods: [80, 0, 0, 0, 0, 0, 0], bads: [20, 0, 0, 0, 0, 0, 0] };
    expect(codes({ ...fine, development: constant }, bins)).toEqual(['one-bin']);
  });

  it('counts a reversal beyond chance and not the small ones', () => {
    expect(reversedBins(readBench(fine, bins), 'holdOut')).toEqual([]);
    const slightly = { ...fine.holdOut, goods: [47, 46, 47, 36, 29, 15, 25], bads: [3, 4, 3, 14, 21, 5, 5] };
    expect(reversedBins(readBench({ ...fine, holdOut: slightly }, bins), 'holdOut')).toEqual([]);
    const reversed = { ...fine.holdOut, goods: [30, 30, 48, 36, 29, 15, 25], bads: [20, 20, 2, 14, 21, 5, 5] };
    expect(reversedBins(readBench({ ...fine, holdOut: reversed }, bins), 'holdOut')).toEqual([1]);
    expect(codes({ ...fine, holdOut: reversed }, bins)).toEqual(['reversed-in-hold-out']);
    // The same counts out of time; covered, nothing of them is there to be told.
    const outOfTime = { ...reversed, rows: fine.holdOut.rows };
    const [warning] = benchWarnings(readBench({ ...fine, outOfTime }, bins), limits);
    expect(warning).toMatchObject({ code: 'reversed-out-of-time', bins: [1] });
    expect(warning.message).toBe('The order of risk is reversed out of time, beyond chance, up to and including 20 to under 30.');
  });
});

describe('edits of cuts', () => {
  it('moves a cut between its neighbours and no further', () => {
    expect(moveCut(fine, bins, 0, 10)).toMatchObject({
      kind: 'cut moved',
      what: 'Cut moved from 20 to 10',
      bins: { edges: [10, 30] },
    });
    expect(moveCut(fine, bins, 0, 30)).toBeNull();
    expect(moveCut(fine, bins, 0, 12)).toBeNull();
    expect(edgeBeside(fine, bins, 0, 1)).toBeNull();
    expect(edgeBeside(fine, bins, 0, -1)).toBe(10);
    expect(edgeBeside(fine, bins, 1, 1)).toBe(40);
  });

  it('what has joined a bin stays with it when cuts come and go', () => {
    const joined: NumericBins = { ...bins, special: [2], missing: 1 };
    expect(addCut(fine, joined, 10)?.bins).toEqual({ kind: 'numeric', edges: [10, 20, 30], special: [3], missing: 2 });
    expect(addCut(fine, joined, 40)?.bins).toEqual({ kind: 'numeric', edges: [20, 30, 40], special: [2], missing: 1 });
    expect(mergeNumeric(fine, joined, 0)?.bins).toEqual({ kind: 'numeric', edges: [30], special: [1], missing: 0 });
    expect(mergeNumeric(fine, joined, 2)).toBeNull();
  });

  it('splits where the information value becomes largest', () => {
    const one: NumericBins = { ...bins, edges: [] };
    const split = splitNumeric(fine, one, 0)!;
    const values = fine.edges.map((edge) => readBench(fine, { ...one, edges: [edge] }).informationValue);
    expect(readBench(fine, split.bins).informationValue).toBe(Math.max(...values));
    expect(splitNumeric(fine, { ...bins, edges: [10, 20, 30, 40] }, 1)).toBeNull();
  });

  it('splits within the constraints where that can be, by their criterion, and says where it cannot', () => {
    const wish = { smallestShare: 0.2, smallestGoods: 20, smallestBads: 20 };
    fc.assert(
      fc.property(
        fc.array(fc.tuple(fc.integer({ min: 0, max: 300 }), fc.integer({ min: 0, max: 60 })), { minLength: 4, maxLength: 12 }),
        fc.constantFrom('information value', 'deviance'),
        (cells, criterion) => {
          const edges = cells.slice(1).map((_, place) => 10 * (place + 1));
          const [goods, bads] = [cells.map(([good]) => good), cells.map(([, bad]) => bad)];
          const counts = (extra: number[]) => ({ rows: extra.map((good, place) => good + bads[place]), goods: extra, bads });
          const development = { ...counts(goods), rows: [...counts(goods).rows, 0], goods: [...goods, 0], bads: [...bads, 0] };
          const one: FineClasses = { ...fine, edges, special: [], development, holdOut: development, outOfTime: null };
          const whole: NumericBins = { kind: 'numeric', edges: [], special: [], missing: 'own' };
          const split = splitNumeric(one, whole, 0, { ...wish, criterion });
          const sides = edges.map((edge) => {
            const at = edges.indexOf(edge) + 1;
            const sum = (values: number[]): number => values.reduce((total, value) => total + value, 0);
            return [goods, bads].flatMap((values) => [sum(values.slice(0, at)), sum(values.slice(at))]);
          });
          const total = sides.length > 0 ? sides[0].reduce((sum, count) => sum + count, 0) : 0;
          const possible = sides.map(([g, h, b, c]) => g > 0 && h > 0 && b > 0 && c > 0);
          const within = sides.map(
            ([g, h, b, c]) => Math.min(g + b, h + c) >= 0.2 * total && Math.min(g, h) >= 20 && Math.min(b, c) >= 20,
          );
          if (!possible.includes(true)) return expect(split).toBeNull();
          const term = (count: number, of: number): number => (count > 0 ? count * Math.log(count / of) : 0);
          const value = ([g, h, b, c]: number[]): number =>
            criterion === 'deviance'
              ? term(g, g + b) + term(b, g + b) + term(h, h + c) + term(c, h + c)
              : (g / (g + h) - b / (b + c)) * Math.log(g / (g + h) / (b / (b + c))) +
                (h / (g + h) - c / (b + c)) * Math.log(h / (g + h) / (c / (b + c)));
          const allowed = sides.filter((_, place) => (within.includes(true) ? within[place] : possible[place]));
          const chosen = sides[edges.indexOf(split!.bins.edges[0])];
          expect(allowed).toContain(chosen);
          expect(value(chosen)).toBeCloseTo(Math.max(...allowed.map(value)), 8);
          expect(split!.what.includes('less than the constraints ask for')).toBe(!within.includes(true));
        },
      ),
      { numRuns: 500 },
    );
  });

  it('moves special codes and missing', () => {
    expect(moveSpecial(fine, bins, 0, 2, '30 and over')).toMatchObject({
      what: 'no record joined to 30 and over',
      bins: { special: [2] },
    });
    expect(moveSpecial(fine, bins, 0, 'own', '')).toBeNull();
    expect(moveMissing(bins, 1, '20 to under 30')).toMatchObject({ kind: 'missing moved', bins: { missing: 1 } });
  });
});

describe('edits of groups', () => {
  it('keeps groups in order of risk and whatever joined one with it', () => {
    const grouped = groupCategories(homes, homeBins, ['parents'], 0)!;
    expect(grouped).toMatchObject({ kind: 'categories grouped', what: 'Grouped parents with owner' });
    expect(grouped.bins).toEqual({ ...homeBins, groups: [['owner', 'parents'], ['rent'], ['other']], missing: 2 });
    const apart = groupCategories(homes, homeBins, ['rent'], 'new')!;
    expect(apart.bins.groups).toEqual([['owner'], ['parents'], ['rent'], ['other']]);
    expect(apart.bins.missing).toBe(3);
    expect(riskOrder(homes, apart.bins.groups)).toEqual([0, 1, 2, 3]);
  });

  it('follows categories of a group that is dissolved', () => {
    expect(groupCategories(homes, homeBins, ['other'], 0)?.bins).toMatchObject({
      groups: [
        ['owner', 'other'],
        ['rent', 'parents'],
      ],
      missing: 0,
    });
    expect(mergeGroups(homes, homeBins, 1, 2)?.bins).toMatchObject({
      groups: [['owner'], ['rent', 'parents', 'other']],
      missing: 1,
    });
  });

  it('does nothing where nothing would change', () => {
    expect(groupCategories(homes, homeBins, ['owner'], 'new')).toBeNull();
    expect(groupCategories(homes, homeBins, ['owner'], 0)).toBeNull();
    expect(groupCategories(homes, homeBins, ['nowhere'], 0)).toBeNull();
    expect(splitGroup(homes, homeBins, 0)).toBeNull();
  });

  it('splits a group along its order of risk', () => {
    const all: CategoricalBins = { ...homeBins, groups: [['owner', 'parents', 'rent', 'other']], missing: 'own' };
    const split = splitGroup(homes, all, 0)!;
    expect(split.bins.groups).toEqual([['owner'], ['rent', 'parents', 'other']]);
    expect(readBench(homes, split.bins).informationValue).toBeGreaterThan(readBench(homes, all).informationValue);
  });
});
