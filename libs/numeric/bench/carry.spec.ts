import { describe, expect, it } from 'vitest';
import { carriedEdges, carryEdits, type EarlierEdit } from './carry';
import { groupCategories, mergeGroups, moveUnseen } from './categorical-edits';
import { addCut, mergeNumeric, moveCut, moveMissing, moveSpecial, type EditOf } from './numeric-edits';
import type { Bins, CategoricalBins, FineClasses, NumericBins } from './types';

const slots = (goods: number[], bads: number[]) => ({ rows: goods.map((good, i) => good + bads[i]), goods, bads });
const fine: FineClasses = {
  kind: 'numeric', edges: [10, 20, 30, 40, 50], closed: 'left', range: [0, 60], categories: [], special: ['no record', 'refused'],
  development: slots([10, 20, 30, 40, 50, 60, 5, 5, 5], [30, 25, 20, 15, 10, 5, 5, 5, 5]), holdOut: slots([0, 0, 0, 0, 0, 0, 0, 0, 0], [0, 0, 0, 0, 0, 0, 0, 0, 0]), outOfTime: null,
}; // prettier-ignore
const earlier: NumericBins = { kind: 'numeric', edges: [20, 40], special: ['own', 'own'], missing: 'own' };
const here: NumericBins = { kind: 'numeric', edges: [10, 30, 50], special: ['own', 'own'], missing: 'own' };
const made = (before: Bins, edit: EditOf<Bins> | null): EarlierEdit => {
  if (!edit) throw new Error('The edit cannot be done');
  return { kind: edit.kind, what: edit.what, before, after: edit.bins };
};
const carried = (bins: Bins, ...edits: EarlierEdit[]) => carryEdits(fine, bins, { fine, edits });

describe('edits of an earlier sample', () => {
  it('move the cut that stands for theirs to the same value', () => {
    const { bins, steps } = carried({ ...here, edges: [10, 50] }, made(earlier, moveCut(fine, earlier, 1, 30)));
    // The cut at 40 lay beyond 20: here that is the one at 50.
    expect(steps).toMatchObject([{ kept: true, kind: 'cut moved', what: 'Cut moved from 50 to 30' }]);
    expect(bins).toMatchObject({ edges: [10, 30] });
  });

  it('add, merge and join one after the other, each where the one before ended', () => {
    const first = addCut(fine, earlier, 50)!;
    const second = mergeNumeric(fine, first.bins, 0)!;
    const third = moveMissing(second.bins, 1, '')!;
    const { bins, steps } = carried(
      { ...here, edges: [20, 30] },
      made(earlier, first),
      made(first.bins, second),
      made(second.bins, third),
    );
    expect(steps.map((step) => step.kept && step.what)).toEqual([
      'Cut added at 50',
      'Merged under 20 with 20 to under 30',
      'Missing joined to 30 to under 50',
    ]);
    expect(bins).toEqual({ ...here, edges: [30, 50], missing: 1 });
    steps
      .slice(1)
      .forEach((step, at) => expect(step.kept && step.before).toEqual(steps[at].kept && (steps[at] as { after: Bins }).after));
  });

  it('say why they make no sense here, and leave the bins alone', () => {
    const far = { ...fine, range: [0, 200] as const, edges: [...fine.edges, 150] };
    const cases: [EarlierEdit, RegExp][] = [
      [made(earlier, addCut(far, earlier, 150)), /one side of 150/],
      [made(earlier, addCut(fine, earlier, 30)), /already/],
      [made({ ...earlier, edges: [31, 35, 45] }, { kind: 'bins merged', what: '', bins: { ...earlier, edges: [31, 45] } }), /No cut lies/],
      [made({ kind: 'categorical', groups: [['a']], special: [], missing: 'own', unseen: 'neutral' }, { kind: 'missing moved', what: '', bins: { kind: 'categorical', groups: [['a']], special: [], missing: 0, unseen: 'neutral' } }), /categorical then/],
    ]; // prettier-ignore
    for (const [edit, why] of cases) {
      const { bins, steps } = carried(here, edit);
      expect(steps).toEqual([{ kept: false, why: expect.stringMatching(why) as string }]);
      expect(bins).toBe(here);
    }
    const other = { ...fine, special: ['unknown', 'refused'] };
    const unknown = made(earlier, moveSpecial(other, earlier, 0, 1, ''));
    expect(carryEdits(fine, here, { fine: other, edits: [unknown] }).steps).toEqual([
      { kept: false, why: '"unknown" is no special code here.' },
    ]);
    const bare = { ...fine, development: slots([10, 20, 30, 40, 50, 60, 5, 5, 5], [30, 25, 20, 15, 10, 0, 5, 5, 5]) };
    const split = made(earlier, addCut(fine, earlier, 50));
    expect(carryEdits(bare, earlier, { fine, edits: [split] }).steps[0]).toMatchObject({
      kept: false,
      why: /without a good or without a bad/,
    });
  });

  it('follow a special code by its label', () => {
    const turned = { ...fine, special: ['refused', 'no record'] };
    const { bins } = carryEdits(turned, here, { fine, edits: [made(earlier, moveSpecial(fine, earlier, 0, 2, ''))] });
    expect(bins.special).toEqual(['own', 3]);
  });

  it('want the fine classes split where their cuts lie, and only where there are values on both sides', () => {
    const finer = { ...fine, edges: [10, 20, 25, 30, 40, 50, 90], range: [0, 100] as const };
    const edits = [
      made(earlier, moveCut(finer, earlier, 0, 25)),
      made(earlier, addCut(finer, earlier, 90)),
      made(earlier, addCut(fine, earlier, 30)),
    ];
    expect(carriedEdges(fine, edits)).toEqual([25]);
  });
});

describe('edits of categories', () => {
  const home: FineClasses = {
    kind: 'categorical', edges: [], closed: 'left', range: null, categories: ['rent', 'owner', 'parents', 'hostel'], special: [],
    development: slots([50, 90, 30, 5, 5, 0], [30, 10, 10, 5, 5, 0]), holdOut: slots([0, 0, 0, 0, 0, 0], [0, 0, 0, 0, 0, 0]), outOfTime: null,
  }; // prettier-ignore
  const start: CategoricalBins = {
    kind: 'categorical',
    groups: [['owner'], ['parents'], ['rent'], ['hostel']],
    special: [],
    missing: 'own',
    unseen: 'neutral',
  };
  const gone: FineClasses = { ...home, categories: ['rent', 'owner', 'hostel', 'ship'] };
  const now: CategoricalBins = { ...start, groups: [['owner', 'ship'], ['rent'], ['hostel']] };
  const of = (edit: EditOf<CategoricalBins> | null, before = start): EarlierEdit => made(before, edit);

  const carryOver = (bins: Bins, ...edits: EarlierEdit[]) => carryEdits(gone, bins, { fine: home, edits });

  it('group, set apart and join what is there', () => {
    const { bins, steps } = carryOver(now, of(mergeGroups(home, start, 2, 3)), of(moveUnseen(start, 0, 'owner')));
    expect(steps.map(({ kept }) => kept)).toEqual([true, true]);
    expect(bins).toMatchObject({
      groups: [
        ['owner', 'ship'],
        ['rent', 'hostel'],
      ],
      unseen: 0,
    });
    const pooled: CategoricalBins = { ...start, groups: [['owner'], ['parents', 'rent', 'hostel']] };
    const apart = of(groupCategories(home, pooled, ['hostel'], 'new'), pooled);
    expect(
      carryOver(
        {
          ...now,
          groups: [
            ['owner', 'ship'],
            ['rent', 'hostel'],
          ],
        },
        apart,
      ).steps[0],
    ).toMatchObject({ kept: true, what: 'Set hostel apart' });
  });

  it('are not made where their categories are gone or together already', () => {
    expect(carryOver(now, of(mergeGroups(home, start, 1, 2))).steps[0]).toMatchObject({
      kept: false,
      why: /Fewer than two/,
    });
    expect(
      carryOver(
        {
          ...now,
          groups: [
            ['owner', 'ship'],
            ['rent', 'hostel'],
          ],
        },
        of(mergeGroups(home, start, 2, 3)),
      ).steps[0],
    ).toMatchObject({
      kept: false,
      why: /in one group already/,
    });
  });
});
