import { AskedConstraints, type Bins, type Fine, type NumericBins } from '@tallystone/contracts/binnings/bins';
import type { DataReading } from '@tallystone/contracts/specification/types';
import { type EarlierEdit, binOfSlots } from '@tallystone/numeric/bench';
import { Generator } from '@tallystone/numeric/random/generator';
import { describe, expect, it } from 'vitest';
import { sourceOf } from '../replay/source';
import { BAD, DEVELOPMENT, GOOD } from '../replay/types';
import { classColumn } from './class-column';
import { mostFineEdges } from './fine-classes';

const data: DataReading = {
  sha256: null,
  delimiter: ',',
  encoding: 'utf-8',
  decimal: '.',
  thousands: null,
  trim: true,
  missing: [''],
};
const control = { cancelled: () => false, progress: () => undefined, transfer: () => undefined };
/** Incomes whose risk falls with them, every value different; shifted, no value is one of the other sample's. */
function incomes(rows: number, shift: number): string[] {
  return Array.from({ length: rows }, (_, row) => (1000 + ((row * 7919) % rows) + shift).toFixed(2));
}

/** Fine classes of the sample that edits were made on: parted at all of their cuts, with goods and bads in each. */
function fineOf(edits: readonly EarlierEdit[]): Fine {
  const edges = [...new Set(edits.flatMap(({ before, after }) => [...edgesOf(before), ...edgesOf(after)]))].sort((a, b) => a - b);
  const counts = (each: number) => Array.from({ length: edges.length + 2 }, () => each);
  const development = { rows: counts(80), goods: counts(60), bads: counts(20) };
  return {
    kind: 'numeric',
    edges,
    closed: 'left',
    range: [0, 1e6],
    categories: [],
    special: [],
    development,
    holdOut: development,
    outOfTime: null,
  };
}

async function classed(values: string[], earlier: EarlierEdit[], constraints: object = {}) {
  const random = new Generator(11);
  const outcome = Uint8Array.from(values, (value) =>
    random.uniform() < 0.6 - (0.4 * (Number(value) - 1000)) / values.length ? BAD : GOOD,
  );
  const source = sourceOf({ income: values });
  const result = await classColumn(
    {
      defined: { column: 'income', kind: 'numeric', special: [] },
      column: source.column('income')!,
      data,
      counted: { rows: values.length, partition: new Uint8Array(values.length).fill(DEVELOPMENT), outcome, weights: null },
      constraints: AskedConstraints.parse(constraints),
      earlier: { fine: fineOf(earlier), edits: earlier },
      months: null,
    },
    control,
  );
  if ('unusable' in result) throw new Error(result.unusable);
  return result;
}

const cuts = (...edges: number[]): NumericBins => ({ kind: 'numeric', edges, special: [], missing: 'own' });
const edit = (kind: EarlierEdit['kind'], before: Bins, after: Bins): EarlierEdit => ({ kind, what: kind, before, after });
const edgesOf = (bins: EarlierEdit['before']): readonly number[] => (bins.kind === 'numeric' ? bins.edges : []);
/** Bins that the fine classes can tell apart: throws otherwise. */
const countable = (fine: Fine, bins: Bins): number => binOfSlots(fine, bins).length;

describe('edits carried over to a new sample', () => {
  it('put every cut of own bins that were kept in place, where the earlier cuts lie on no fine class here', async () => {
    const here = incomes(3000, 0.37);
    // Hers: two cuts that were moved and saved. His were kept over them: two cuts differ at once, and three lie inside fine classes of this sample.
    const first = cuts(1500.11, 2200.22, 3100.33);
    const hers = cuts(1600.11, 2200.22, 3100.33);
    const hersToo = cuts(1600.11, 2300.22, 3100.33);
    const result = await classed(here, [
      edit('cut moved', first, hers),
      edit('cut moved', hers, hersToo),
      edit('kept own', hersToo, first),
      edit('cut moved', first, cuts(1500.11, 2200.22, 3200.44)),
    ]);
    expect(result.carried.at(-2)).toMatchObject({ kept: true, after: { edges: [1500.11, 2200.22, 3100.33] } });
    expect(result.definition).toMatchObject({ edges: [1500.11, 2200.22, 3200.44] });
    // Four cut bins, and missing.
    expect(result.summary.bins).toBe(5);
    expect(edgesOf(result.automatic)).not.toContain(1500.11);
  });

  it('put the bins back that an undone classing anew had replaced', async () => {
    const here = incomes(3000, 0.37);
    const anew = cuts(1200.5, 1700.25, 2600.5);
    const back = cuts(1400.25, 1700.25, 2900.25, 3500.25);
    const result = await classed(here, [edit('kept own', anew, back)]);
    expect(result.carried).toMatchObject([{ kept: true, kind: 'kept own', after: back }]);
    expect(result.definition).toMatchObject({ edges: [...back.edges] });
    expect(countable(result.fine, back)).toBe(result.fine.development.rows.length);
  });

  it('say so where there is no room for their cuts among the fine classes, and the characteristic is classed', async () => {
    const here = incomes(5000, 0.37);
    const many = Array.from({ length: 80 }, (_, index) => 1010.11 + 60 * index);
    const result = await classed(here, [edit('kept own', cuts(1500), cuts(...many))], { fineClasses: 200 });
    expect(result.fine.edges.length).toBe(mostFineEdges(0));
    expect(result.carried).toEqual([
      {
        kept: false,
        why: expect.stringMatching(
          /^There is no room for a cut at [\d.]+: .*there are 249 of them, the most there can be\.$/,
        ) as string,
      },
    ]);
    expect(result.definition).toMatchObject({ edges: edgesOf(result.automatic), classing: { made: 'automatic' } });
    expect(countable(result.fine, result.automatic)).toBe(result.fine.development.rows.length);

    // Cuts one by one: the latest have what room there is.
    const one = many.map((to, index) => edit('cut added', cuts(...many.slice(0, index)), cuts(...many.slice(0, index + 1))));
    const added = await classed(here, one, { fineClasses: 200 });
    const room = mostFineEdges(0) - 199;
    const without = added.carried.flatMap((step, index) =>
      !step.kept && step.why.startsWith('There is no room for a cut at ') ? [index] : [],
    );
    expect(without).toEqual(Array.from({ length: many.length - room }, (_, index) => index));
    expect(added.carried.at(-1)).toMatchObject({ kept: true, what: `Cut added at ${many.at(-1)}` });
  });
});
