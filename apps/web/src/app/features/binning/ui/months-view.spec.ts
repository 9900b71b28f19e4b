import type { CharacteristicMonths } from '@tallystone/contracts/binnings/months';
import { readBench, readPeriods } from '@tallystone/numeric/bench';
import { utilisation } from '../testing/characteristics';
import { asMeasure, asSpan, drawMonths, fits, monthsFinding, periodRows, usualSpan } from './months-view';

const { fine, current: bins } = utilisation;
const reading = readBench(fine, bins);

/** Every month the same: a part of all of development's counts. */
const months = (part: number, names: readonly string[]): CharacteristicMonths => {
  const times = (values: readonly number[], by: number): number[] => values.map((value) => value * by);
  const of = (counts: typeof fine.development) =>
    names.map((month) => ({
      month,
      rows: times(counts.rows, part),
      goods: times(counts.goods, part),
      bads: times(counts.bads, part),
    }));
  return { dateColumn: 'applied_on', development: of(fine.development), holdOut: of(fine.holdOut), undated: 0, outOfTime: null };
};
const year = Array.from({ length: 12 }, (_, month) => `2023-${String(month + 1).padStart(2, '0')}`);

describe('bins by month', () => {
  it('takes what the address says, and nothing else', () => {
    expect([asSpan('month'), asSpan('quarter'), asSpan('year'), asSpan(undefined)]).toEqual(['month', 'quarter', null, null]);
    expect([asMeasure('woe'), asMeasure('badRate'), asMeasure('iv'), asMeasure(undefined)]).toEqual([
      'woe',
      'badRate',
      null,
      null,
    ]);
  });

  it('goes by month where cells can be read, else by quarter', () => {
    expect(usualSpan(fine, bins, months(0.5, year))).toBe('month');
    expect(usualSpan(fine, bins, months(0.02, year))).toBe('quarter');
  });

  it('is drawn only for the slots that the fine classes have', () => {
    const counted = months(0.5, year);
    expect(fits(fine, counted)).toBe(true);
    expect(fits({ ...fine, edges: [5, ...fine.edges] }, counted)).toBe(false);
    expect(fits(fine, { ...counted, development: [], holdOut: [] })).toBe(true);
  });

  it('says how far WOE moves and how many cells are small', () => {
    const counted = months(0.5, year);
    const said = monthsFinding(fine, bins, counted, readPeriods(fine, bins, counted, 'month'));
    expect(said).toBe(
      'WOE moves no more from month to month than chance lets it (12 months). 24 of 120 cells have fewer than 5 goods or bads.',
    );
    const one = months(0.5, year.slice(0, 1));
    expect(monthsFinding(fine, bins, one, [])).toBe('Too few goods and bads by month to tell how WOE moves.');
    // Risk is the other way round in every second month.
    const turned = {
      ...counted,
      development: counted.development.map((month, index) =>
        index % 2 === 0
          ? month
          : { ...month, rows: [...month.rows].reverse(), goods: [...month.goods].reverse(), bads: [...month.bads].reverse() },
      ),
    };
    expect(monthsFinding(fine, bins, turned, [])).toMatch(/^WOE moves from month to month by ±0\.\d\d beyond chance/);
  });

  it('gives each bin a strip and each period a place; small cells stay inside and have no interval', () => {
    const counted = months(0.1, year);
    const drawing = drawMonths(reading, readPeriods(fine, bins, counted, 'quarter'), { width: 900, measure: 'woe' });
    expect(drawing.strips).toHaveLength(reading.bins.length);
    expect(drawing.ticks.map(({ text }) => text)).toEqual(['2023 Q1', '2023 Q2', '2023 Q3', '2023 Q4']);
    for (const { marks, top, bottom, level } of drawing.strips) {
      expect(marks).toHaveLength(8);
      for (const mark of marks) {
        expect(mark.y).toBeGreaterThanOrEqual(top);
        expect(mark.y).toBeLessThanOrEqual(bottom);
        expect(mark.interval === null).toBe(mark.small);
        // Every quarter is like all of development: its mark lies on the line, but for what hold-out is and smoothing adds.
        if (mark.partition === 'development') expect(Math.abs(mark.y - level)).toBeLessThan(1);
      }
      expect(marks.map(({ x }) => x)).toSatisfy((all: number[]) => all.every((x) => x > drawing.left && x < drawing.right));
    }
    const narrow = drawMonths(reading, readPeriods(fine, bins, counted, 'month'), { width: 358, measure: 'badRate' });
    expect(narrow.ticks.length).toBeLessThanOrEqual(5);
    expect(narrow.ends[1]).toMatch(/^\u2212\d+\u202F%$/);
    // A bin without rows has no strip.
    const none = {
      ...counted,
      development: [],
      holdOut: counted.holdOut.map((month) => ({ ...month, rows: month.rows.map((n, slot) => (slot === 11 ? 0 : n)) })),
    };
    expect(drawMonths(reading, readPeriods(fine, bins, none, 'month'), { width: 900, measure: 'woe' }).strips).toHaveLength(
      reading.bins.length - 1,
    );
  });

  it('has the same numbers as a table', () => {
    const periods = readPeriods(fine, bins, months(0.5, year), 'month');
    const rows = periodRows(reading, periods);
    expect(rows).toHaveLength(reading.bins.length * 24);
    expect(rows[0]).toMatchObject({ bin: 'under 20', period: '2023-01', partition: 'development' });
    expect(new Set(rows.map(({ key }) => key)).size).toBe(rows.length);
  });
});
