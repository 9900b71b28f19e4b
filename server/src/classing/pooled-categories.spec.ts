import { AskedConstraints } from '@tallystone/contracts/binnings/bins';
import { mostApart } from '@tallystone/numeric/binning/categories';
import { Generator } from '@tallystone/numeric/random/generator';
import { describe, expect, it } from 'vitest';
import { automaticGroups } from '../replay/classing';
import { type SourceColumn, sourceOf } from '../replay/source';
import { BAD, DEVELOPMENT, GOOD, HOLD_OUT } from '../replay/types';
import type { TaskControl } from '../threads/task';
import { classColumn, reclassFine } from './class-column';
import { binsOfEntry } from './definition';
import { mostCategories } from './fine-classes';

const ROWS = 30_000;
const control: TaskControl = { cancelled: () => false, progress: () => undefined, transfer: () => undefined };
const data = { sha256: null, delimiter: ',', encoding: 'utf-8', decimal: '.', thousands: null, trim: true, missing: [''] } as const;

/** Towns: a few large ones and a long tail, risk differing by town; in hold-out a town that development has not seen. */
function invented(count: number, extra: readonly string[] = []) {
  const random = new Generator(17);
  const names = [...extra, ...Array.from({ length: count - extra.length }, (_, i) => `Town ${String(i).padStart(4, '0')}`)];
  const town: string[] = [];
  const outcome = new Uint8Array(ROWS);
  const partition = new Uint8Array(ROWS).fill(DEVELOPMENT);
  for (let row = 0; row < ROWS; row++) {
    const place = row < count ? row : Math.floor(count * random.uniform() ** 3);
    town.push(names[place]);
    outcome[row] = random.uniform() < 0.75 + 0.2 * Math.sin(place) ? GOOD : BAD;
    if (row % 5 === 4 && row >= count) partition[row] = HOLD_OUT;
  }
  town[ROWS - 1] = 'Never seen';
  partition[ROWS - 1] = HOLD_OUT;
  return { names, town, counted: { rows: ROWS, partition, outcome, weights: null }, column: sourceOf({ town }).column('town') as SourceColumn };
}

function classed(sample: ReturnType<typeof invented>, asked: Partial<AskedConstraints> = {}) {
  const { column, counted } = sample;
  const defined = { column: 'town', kind: 'categorical' as const, special: [] };
  const made = classColumn({ defined, column, data: { ...data, missing: [...data.missing] }, counted, constraints: AskedConstraints.parse(asked), months: null }, control);
  if (made instanceof Promise) throw new Error('It answers at once');
  return made;
}

function usable(sample: ReturnType<typeof invented>, asked: Partial<AskedConstraints> = {}) {
  const made = classed(sample, asked);
  if ('unusable' in made || made.definition.kind !== 'categorical' || made.automatic.kind !== 'categorical') throw new Error('It can be classed');
  return { ...made, definition: made.definition, automatic: made.automatic };
}

describe('a characteristic with more categories than a bin has codes for', () => {
  it.each([0.05, 0.02, 0.001])('pools the rarest, and comes to what a fold comes to that has every row (smallest share %d)', (smallestShare) => {
    const sample = invented(900);
    const { fine, definition, automatic } = usable(sample, { smallestShare, smallestGoods: 5, smallestBads: 5 });
    expect(fine.categories).toHaveLength(mostApart + 1);
    expect(fine.categories.at(-1)).toBe('rarer categories');
    expect(fine.pooled?.categories).toHaveLength(900 - mostApart);
    // Every row has its place: pooled ones with each other, the town that development has not seen in the last slot.
    const sum = (counts: readonly number[]): number => counts.reduce((total, one) => total + one, 0);
    expect(sum(fine.development.rows) + sum(fine.holdOut.rows)).toBe(ROWS);
    expect(fine.holdOut.rows.at(-1)).toBe(1);
    const rowsOf = (name: string): number => sample.town.filter((one, row) => one === name && sample.counted.partition[row] === DEVELOPMENT).length;
    expect(fine.development.rows[mostApart]).toBe(sum(fine.pooled!.categories.map(rowsOf)));
    expect(Math.max(...fine.pooled!.categories.map(rowsOf))).toBeLessThanOrEqual(Math.min(...fine.categories.slice(0, mostApart).map(rowsOf)));
    // The specification lists every category once; the bench has one name for the pooled ones.
    expect(definition.groups.flat().sort()).toEqual([...sample.names].sort());
    expect(binsOfEntry(definition, fine.pooled)).toEqual(automatic);
    const categories = Int32Array.from(sample.town, (name) => sample.names.indexOf(name));
    const uses = sample.counted.partition.map((part) => (part === DEVELOPMENT ? 1 : 0));
    // In the order of rows, as the fine classes are: equally many rows then say nothing of who stands first.
    const order = [...fine.categories.slice(0, mostApart), ...fine.pooled!.categories];
    const inOrder = categories.map((category) => order.indexOf(sample.names[category]));
    const settings = { made: 'automatic', ...AskedConstraints.parse({ smallestShare, smallestGoods: 5, smallestBads: 5 }), trend: 'any' } as const;
    const { groupOf, groups } = automaticGroups(inOrder, order.length, sample.counted.outcome, null, settings, uses);
    expect(groups).toBe(definition.groups.length);
    expect(groups).toBeGreaterThan(2);
    for (const [group, members] of definition.groups.entries()) for (const name of members) expect(groupOf[order.indexOf(name)]).toBe(group);
    // Classed anew from the counts alone.
    const [again] = reclassFine(
      { characteristics: [{ fine, outOfTime: fine.holdOut, months: null, constraints: AskedConstraints.parse({ smallestShare, smallestGoods: 5, smallestBads: 5 }) }] },
      control,
    ) as { automatic: unknown }[];
    expect(again.automatic).toEqual(automatic);
  });

  it('leaves as many as there are codes for to themselves', () => {
    const { fine } = usable(invented(mostApart + 1));
    expect(fine.categories).toHaveLength(mostApart + 1);
    expect(fine.pooled).toBeUndefined();
  });

  it('takes a name for the pooled that none of them has', () => {
    const { fine, definition } = usable(invented(400, ['rarer categories']));
    expect(fine.pooled?.name).toBe('rarer categories *');
    expect(definition.groups.flat().filter((name) => name.startsWith('rarer'))).toEqual(['rarer categories']);
  });

  it('says how many are too many', () => {
    expect(classed(invented(mostCategories + 1))).toEqual({
      unusable: 'It has 2001 different values in development; at most 2000 can be classed, the rarest of them as one. Group them before the file is brought in.',
    });
  });
});
