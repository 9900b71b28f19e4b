import { AskedConstraints, type Bins } from '@tallystone/contracts/binnings/bins';
import type { EarlierEdits } from '@tallystone/numeric/bench';
import { classNumeric } from '@tallystone/numeric/binning/classing';
import { Generator } from '@tallystone/numeric/random/generator';
import { describe, expect, it } from 'vitest';
import { automaticEdges, automaticGroups } from '../replay/classing';
import { type SourceColumn, sourceOf } from '../replay/source';
import { BAD, DEVELOPMENT, GOOD } from '../replay/types';
import type { TaskControl } from '../threads/task';
import { classColumn, reclassFine, splitColumn } from './class-column';

/**
 * The bench classes from counted fine classes, a fold of the cross-validation from rows in memory. On the same rows both have to come to the
 * same bins, or a fold would not repeat what the modeller did.
 */

const ROWS = 4000;
const control: TaskControl = { cancelled: () => false, progress: () => undefined, transfer: () => undefined };
const data = {
  sha256: null,
  delimiter: ',',
  encoding: 'utf-8',
  decimal: '.',
  thousands: null,
  trim: true,
  missing: ['', 'NA'],
} as const;

function invented(seed: number) {
  const random = new Generator(seed);
  const utilisation: string[] = [];
  const home: string[] = [];
  const outcome = new Uint8Array(ROWS);
  const weights = new Float64Array(ROWS);
  for (let row = 0; row < ROWS; row++) {
    const value = Math.round(random.uniform() * 1000) / 10;
    const place = ['owner', 'rent', 'parents', 'other', 'hostel'][Math.min(4, Math.floor(random.uniform() ** 2 * 5))];
    const draw = random.uniform();
    utilisation.push(draw < 0.05 ? '-999' : draw < 0.1 ? '' : String(value));
    home.push(random.uniform() < 0.04 ? 'NA' : place);
    const eta = 1.5 - 0.03 * (value - 50) + { owner: 0.6, rent: -0.5, parents: 0, other: -0.2, hostel: -0.9 }[place]!;
    outcome[row] = random.uniform() < 1 / (1 + Math.exp(-eta)) ? GOOD : BAD;
    weights[row] = 0.5 + random.uniform();
  }
  const columns = sourceOf({ utilisation, home });
  return { utilisation, home, outcome, weights, column: (name: string) => columns.column(name) as SourceColumn };
}

describe.each([
  ['rising', false],
  ['falling', true],
  ['any', true],
  ['one-peak', false],
  ['cross-validated', false],
  ['cross-validated', true],
] as const)('classing under trend "%s" (weights: %s)', (trend, weighted) => {
  it.each([1, 2, 3])('is that of a fold that trains on every row, sample %i', (seed) => {
    const sample = invented(seed);
    const weights = weighted ? sample.weights : null;
    const asked = AskedConstraints.parse({ trend, fineClasses: 60 });
    const counted = { rows: ROWS, partition: new Uint8Array(ROWS).fill(DEVELOPMENT), outcome: sample.outcome, weights };
    // A fold is told how the trend was come to, and not which it was: with another in its place it comes to the same bins.
    const chosen = trend === 'cross-validated';
    const settings = {
      made: 'automatic',
      ...asked,
      trend: chosen ? 'rising' : trend,
      ...(chosen ? { trendBy: 'cross-validation' as const } : {}),
    } as const;

    const numeric = classColumn(
      {
        defined: { column: 'utilisation', kind: 'numeric', special: [{ label: 'no record', values: [-999] }] },
        column: sample.column('utilisation'),
        data: { ...data, missing: [...data.missing] },
        counted,
        constraints: asked,
        months: null,
      },
      control,
    );
    const values = Float64Array.from(sample.utilisation, (text) => (text === '' || text === '-999' ? NaN : Number(text)));
    const edges = automaticEdges(values, sample.outcome, weights, settings, 'left');
    expect(numeric).toMatchObject({ automatic: { edges } });
    if (chosen) {
      expect(numeric).toMatchObject({
        constraints: { trendBy: 'cross-validation' },
        definition: { classing: { trendBy: 'cross-validation' } },
      });
      // The data rise in risk throughout: under the trend in its place nothing could be cut.
      expect(automaticEdges(values, sample.outcome, weights, { ...settings, trendBy: undefined }, 'left')).toEqual([]);
    }
    // Under a trend against the risk nothing may be cut: equal, and told apart from a comparison of nothing with nothing.
    if (trend !== 'rising') expect(edges.length).toBeGreaterThan(1);

    const categorical = classColumn(
      {
        defined: { column: 'home', kind: 'categorical', special: [] },
        column: sample.column('home'),
        data: { ...data, missing: [...data.missing] },
        counted,
        constraints: asked,
        months: null,
      },
      control,
    );
    const names = [...new Set(sample.home)];
    const categories = Int32Array.from(sample.home, (text) => (text === 'NA' ? -1 : names.indexOf(text)));
    const { groupOf, groups } = automaticGroups(categories, names.length, sample.outcome, weights, { ...settings, trend: 'any' });
    const bins = (categorical as { automatic: { groups: string[][] } }).automatic.groups;
    expect(groups).toBeGreaterThan(2);
    expect(bins.map((group) => [...group].sort())).toEqual(
      Array.from({ length: groups }, (_, group) => names.filter((_, index) => groupOf[index] === group).sort()),
    );
  });
});

describe('fine classes as many as the form allows', () => {
  it('leave room for cuts that lie inside one of them', () => {
    const random = new Generator(7);
    const values = Array.from({ length: ROWS }, () => String(Math.round(random.uniform() * 1e6)));
    const outcome = Uint8Array.from(values, (value) => (random.uniform() < 0.2 + Number(value) / 2e6 ? GOOD : BAD));
    const counted = { rows: ROWS, partition: new Uint8Array(ROWS).fill(DEVELOPMENT), outcome, weights: null };
    const asked = AskedConstraints.parse({ fineClasses: 200, mostBins: 5 });
    const column = sourceOf({ income: values }).column('income') as SourceColumn;
    const defined = { column: 'income', kind: 'numeric' as const, special: [{ label: 'none', values: [-999] }] };
    const classed = (earlier: EarlierEdits | null) => {
      const made = classColumn({ defined, column, data: { ...data, missing: [...data.missing] }, counted, constraints: asked, earlier, months: null }, control);
      if (made instanceof Promise || 'unusable' in made) throw new Error('It can be classed');
      return made;
    };
    const { fine, automatic } = classed(null);
    expect(fine.edges).toHaveLength(199);
    if (automatic.kind !== 'numeric') throw new Error('It is numeric');
    const before = automatic;
    const after = { ...before, edges: [...before.edges, 123_456.5].sort((a, b) => a - b) };
    const carried = classed({ fine, edits: [{ kind: 'cut added', what: 'Cut added at 123456.5', before, after }] });
    expect(carried.fine.edges).toHaveLength(200);
    expect(carried.carried).toMatchObject([{ kept: true, what: 'Cut added at 123456.5' }]);
  });
});

describe('fine classes that a cut by hand has split', () => {
  it('are put together again when a characteristic is classed anew: what is called automatic can be repeated', () => {
    const sample = invented(5);
    const asked = AskedConstraints.parse({ trend: 'falling', fineClasses: 12, mostBins: 6, smallestDifference: 0 });
    const defined = { column: 'utilisation', kind: 'numeric' as const, special: [{ label: 'no record', values: [-999] }] };
    const counted = { rows: ROWS, partition: new Uint8Array(ROWS).fill(DEVELOPMENT), outcome: sample.outcome, weights: sample.weights };
    const column = sample.column('utilisation');
    const source = { defined, column, data: { ...data, missing: [...data.missing] }, counted, months: null };
    const first = classColumn({ ...source, constraints: asked }, control);
    if (first instanceof Promise || 'unusable' in first) throw new Error('It can be classed');
    let { fine } = first;
    for (const edge of [17.25, 41.05, 66.6]) {
      const split = splitColumn({ ...source, fine, edge }, control);
      if (split instanceof Promise) throw new Error('It answers at once');
      ({ fine } = split);
    }
    expect(fine.splits).toEqual([17.25, 41.05, 66.6]);
    expect(fine.edges.length).toBe(first.fine.edges.length + 3);
    const [again] = reclassFine({ characteristics: [{ fine, outOfTime: first.outOfTime, months: null, constraints: asked }] }, control) as { automatic: Bins }[];
    expect(again.automatic).toEqual(first.automatic);
    const values = Float64Array.from(sample.utilisation, (text) => (text === '' || text === '-999' ? NaN : Number(text)));
    const settings = { made: 'automatic', ...asked, trend: 'falling' } as const;
    expect(again.automatic).toMatchObject({ edges: automaticEdges(values, sample.outcome, sample.weights, settings, 'left') });
    // With the split classes another partition would have been better: the test tells the two apart.
    const finer = classNumeric(
      { rows: fine.development.rows.slice(0, fine.edges.length + 1), goods: fine.development.goods.slice(0, fine.edges.length + 1), bads: fine.development.bads.slice(0, fine.edges.length + 1) },
      { ...asked, trend: 'falling' },
    );
    expect(finer.cuts.map((cut) => fine.edges[cut - 1])).not.toEqual((first.automatic as { edges: number[] }).edges);
  });
});
