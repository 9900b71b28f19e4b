import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type CarriedStep, type EarlierEdit, carriedEdges, carryEdits } from './carry';
import { groupCategories, mergeGroups, moveUnseen, splitGroup } from './categorical-edits';
import { type EditOf, addCut, mergeNumeric, moveCut, moveMissing, moveSpecial, splitNumeric } from './numeric-edits';
import { binOfSlots, coarseCount, slotCount } from './slots';
import type { Bins, CategoricalBins, FineClasses, NumericBins, Place } from './types';

const noCounts = { rows: [], goods: [], bads: [] };
const slots = (goods: number[], bads: number[]) => ({ rows: goods.map((good, i) => good + bads[i]), goods, bads });

/** Bins put in place of others as a whole, as the bench does it for own bins that are kept, and for a classing anew that is undone. */
const kept = (before: Bins, after: Bins, over = 'those of Colin'): EarlierEdit => ({
  kind: 'kept own',
  what: `Kept own bins over ${over}`,
  before,
  after,
});
const made = (before: Bins, edit: EditOf<Bins> | null): EarlierEdit => {
  if (!edit) throw new Error('The edit cannot be done');
  return { kind: edit.kind, what: edit.what, before, after: edit.bins };
};

type Draw = readonly [op: number, a: number, b: number, c: number];
const draws = fc.array(fc.tuple(fc.nat(9), fc.nat(1000), fc.nat(1000), fc.nat(1000)), { minLength: 1, maxLength: 14 });
const count = fc.nat(40);

/** A characteristic with bins as they might have been classed, whatever it is counted from. */
const numericSample = fc
  .record({
    edges: fc.uniqueArray(fc.integer({ min: 1, max: 60 }), { minLength: 1, maxLength: 10 }),
    codes: fc.nat(2),
    counts: fc.array(fc.tuple(count, count), { minLength: 20, maxLength: 20 }),
  })
  .map(({ edges, codes, counts }) => {
    const fine: FineClasses = { kind: 'numeric', edges: [...edges].sort((a, b) => a - b), closed: 'left', range: [0, 70], categories: [], special: ['no record', 'refused'].slice(0, codes), development: noCounts, holdOut: noCounts, outOfTime: null }; // prettier-ignore
    return counted(fine, counts);
  });
const categoricalSample = fc
  .record({
    categories: fc.shuffledSubarray(['rent', 'owner', 'parents', 'hostel', 'ship', 'barracks'], { minLength: 2 }),
    codes: fc.nat(2),
    counts: fc.array(fc.tuple(count, count), { minLength: 20, maxLength: 20 }),
  })
  .map(({ categories, codes, counts }) => {
    const fine: FineClasses = { kind: 'categorical', edges: [], closed: 'left', range: null, categories, special: ['no record', 'refused'].slice(0, codes), development: noCounts, holdOut: noCounts, outOfTime: null }; // prettier-ignore
    return counted(fine, counts);
  });
const sample = fc.oneof(numericSample, categoricalSample);

function counted(fine: FineClasses, counts: readonly (readonly [number, number])[]): FineClasses {
  const used = counts.slice(0, slotCount(fine));
  const development = slots(
    used.map(([good]) => good),
    used.map(([, bad]) => bad),
  );
  return { ...fine, development };
}

/** Some bins or other of these fine classes: as classing under other constraints, or another person, might leave them. */
function someBins(fine: FineClasses, [, a, b, c]: Draw): Bins {
  const place = (draw: number, bins: number): Place => (draw % 3 === 0 ? draw % bins : 'own');
  if (fine.kind === 'numeric') {
    const edges = fine.edges.filter((_, index) => (a >> (index % 10)) % 2 === 0);
    const bins = edges.length + 1;
    return { kind: 'numeric', edges, special: fine.special.map((_, code) => place(b + code, bins)), missing: place(c, bins) };
  }
  const first = fine.categories.filter((_, index) => (a >> index) % 2 === 0);
  const groups = [first, ...fine.categories.filter((one) => !first.includes(one)).map((one) => [one])].filter(
    ({ length }) => length > 0,
  );
  const special = fine.special.map((_, code) => place(b + code, groups.length));
  const unseen = place(b, groups.length);
  return {
    kind: 'categorical',
    groups,
    special,
    missing: place(c, groups.length),
    unseen: unseen === 'own' ? 'neutral' : unseen,
  };
}

/** What a person does next: one edit by hand, own bins that are kept over what was made since, or bins from before they were classed anew. */
function next(fine: FineClasses, states: readonly Bins[], draw: Draw): EarlierEdit | null {
  const bins = states[states.length - 1];
  const [op, a, b] = draw;
  if (op === 0) return kept(bins, states[a % states.length]);
  if (op === 1) return kept(bins, someBins(fine, draw), 'those classed anew');
  const place = a % 3 === 0 ? 'own' : b % coarseCount(bins);
  let edit: EditOf<Bins> | null = null;
  if (op === 2) edit = moveMissing(bins, place, 'a bin');
  else if (op === 3 && fine.special.length > 0) edit = moveSpecial(fine, bins, a % fine.special.length, place, 'a bin');
  else if (bins.kind === 'numeric') {
    const edge = fine.edges[b % fine.edges.length];
    if (op <= 5) edit = addCut(fine, bins, edge);
    else if (op === 6) edit = moveCut(fine, bins, a % Math.max(1, bins.edges.length), edge);
    else if (op === 7) edit = splitNumeric(fine, bins, a % coarseCount(bins));
    else edit = mergeNumeric(fine, bins, a % coarseCount(bins));
  } else if (op <= 5) {
    const categories = fine.categories.filter((_, index) => (a >> index) % 2 === 0);
    edit = groupCategories(fine, bins, categories, b % 3 === 0 ? 'new' : b % coarseCount(bins));
  } else if (op === 6) edit = moveUnseen(bins, place === 'own' ? 'neutral' : place, 'a group');
  else if (op === 7) edit = splitGroup(fine, bins, a % coarseCount(bins));
  else edit = mergeGroups(fine, bins, a % coarseCount(bins), b % coarseCount(bins));
  return edit && made(bins, edit);
}

function historyOf(fine: FineClasses, start: Bins, all: readonly Draw[]): EarlierEdit[] {
  const states = [start];
  const edits: EarlierEdit[] = [];
  for (const draw of all) {
    const edit = next(fine, states, draw);
    if (!edit) continue;
    edits.push(edit);
    states.push(edit.after);
  }
  return edits;
}

/** As the database gives bins back: equal, with their keys in another order. */
const stored = <T>(value: T): T =>
  JSON.parse(JSON.stringify(value), (_, one: unknown) =>
    one !== null && typeof one === 'object' && !Array.isArray(one) ? Object.fromEntries(Object.entries(one).reverse()) : one,
  ) as T;

function joins(start: Bins, steps: readonly CarriedStep[], bins: Bins): void {
  let from = start;
  for (const step of steps) {
    if (!step.kept) continue;
    expect(step.before).toEqual(from);
    from = step.after;
  }
  expect(bins).toEqual(from);
}

describe('any history of edits', () => {
  it('gives the very same bins on the very same sample', () => {
    fc.assert(
      fc.property(sample, fc.tuple(fc.nat(9), fc.nat(1000), fc.nat(1000), fc.nat(1000)), draws, (fine, first, all) => {
        const start = someBins(fine, first);
        const edits = historyOf(fine, start, all);
        const { bins, steps } = carryEdits(fine, start, stored({ fine, edits }));
        expect(bins).toEqual(edits.at(-1)?.after ?? start);
        expect(steps.map((step) => step.kept && step.what)).toEqual(edits.map(({ what }) => what));
        joins(start, steps, bins);
      }),
      { numRuns: 1500, seed: 5 },
    );
  });

  it('leaves bins on any other sample that its fine classes can be counted by, each edit from where the one before ended', () => {
    const other = fc.tuple(sample, sample, fc.tuple(fc.nat(9), fc.nat(1000), fc.nat(1000), fc.nat(1000)), draws);
    let applied = 0;
    fc.assert(
      fc.property(other, ([there, here, first, all]) => {
        const edits = historyOf(there, someBins(there, first), all);
        const start = someBins(here, first);
        // Counts of classes that are split do not matter here: each part has those of the whole.
        const more = here.kind === 'numeric' ? carriedEdges(here, edits).slice(0, 6) : [];
        const edges = [...here.edges, ...more].sort((a, b) => a - b);
        const finer: FineClasses = { ...here, edges, development: slots(Array.from({ length: edges.length + 20 }, (_, at) => (at * 7) % 11), Array.from({ length: edges.length + 20 }, (_, at) => (at * 5) % 7)) }; // prettier-ignore
        const { bins, steps } = carryEdits(finer, start, { fine: there, edits });
        expect(steps).toHaveLength(edits.length);
        joins(start, steps, bins);
        const places = [...bins.special, bins.missing, ...(bins.kind === 'categorical' ? [bins.unseen] : [])];
        for (const place of places) if (typeof place === 'number') expect(place).toBeLessThan(coarseCount(bins));
        expect(binOfSlots(finer, bins).length).toBe(slotCount(finer));
        if (bins.kind === 'categorical') expect(bins.groups.flat().sort()).toEqual([...finer.categories].sort());
        for (const step of steps) expect((step.kept ? step.what : step.why).length).toBeGreaterThan(10);
        applied += steps.filter((step) => step.kept && step.kind === 'kept own').length;
      }),
      { numRuns: 1000, seed: 6 },
    );
    expect(applied).toBeGreaterThan(100);
  });
});

describe('own bins that were kept over those of another', () => {
  const fine: FineClasses = {
    kind: 'numeric', edges: [10, 20, 30, 40, 50], closed: 'left', range: [0, 60], categories: [], special: ['no record', 'refused'],
    development: slots([10, 20, 30, 40, 50, 60, 5, 5, 5], [30, 25, 20, 15, 10, 5, 5, 5, 5]), holdOut: noCounts, outOfTime: null,
  }; // prettier-ignore
  const start: NumericBins = { kind: 'numeric', edges: [20, 40], special: ['own', 'own'], missing: 'own' };
  /** Another sample: other automatic cuts, and the codes the other way round. */
  const here: FineClasses = { ...fine, special: ['refused', 'no record'], range: [0, 45], edges: [10, 15, 20, 30, 40], development: slots([10, 20, 30, 40, 50, 60, 5, 5, 5], [30, 25, 20, 15, 10, 5, 5, 5, 5]) }; // prettier-ignore
  const automatic: NumericBins = { ...start, edges: [15, 30] };

  it('take missing values back out of the bin that the other had joined them to', () => {
    const joined = made(start, moveMissing(start, 0, 'under 20'));
    const own = made(start, moveCut(fine, start, 0, 30));
    const { bins, steps } = carryEdits(here, automatic, { fine, edits: [joined, kept(joined.after, start), own] });
    expect(bins).toEqual({ ...start, edges: [30, 40] });
    expect(steps.map((step) => step.kept && step.what)).toEqual([
      'Missing joined to under 15',
      'Bins as they were kept: cuts at 20, 40',
      'Cut moved from 20 to 30',
    ]);
  });

  it('put special codes and missing where they were, by the labels of the codes', () => {
    const whole: NumericBins = { ...start, edges: [10, 30, 50], special: [0, 2], missing: 1 };
    const { bins, steps } = carryEdits(here, automatic, { fine, edits: [kept(start, whole)] });
    // Nobody here is 50: the cut is not made, and the bin below it is the last.
    expect(bins).toEqual({ ...whole, edges: [10, 30], special: [2, 0] });
    expect(steps).toMatchObject([
      { kept: true, what: 'Bins as they were kept: cuts at 10, 30, without 50, beyond which there is no value' },
    ]);
    const beyond: NumericBins = { ...whole, missing: 3 };
    expect(carryEdits(here, automatic, { fine, edits: [kept(start, beyond)] })).toMatchObject({
      bins: automatic,
      steps: [{ kept: false, why: 'The bin that missing values joined has no rows here.' }],
    });
    expect(carryEdits(here, { ...automatic, edges: [20, 40] }, { fine, edits: [kept(whole, start)] }).steps).toEqual([
      { kept: false, why: 'The bins are like that already.' },
    ]);
  });

  it('are as they were where they had a bin without a bad already, and not where that is new', () => {
    const bare = { ...fine, development: slots([10, 20, 30, 40, 50, 60, 5, 5, 5], [30, 25, 20, 15, 10, 0, 5, 5, 5]) };
    const cut = made(start, addCut(bare, start, 50));
    expect(carryEdits(bare, start, { fine: bare, edits: [cut] }).bins).toEqual(cut.after);
    expect(carryEdits(bare, start, { fine, edits: [kept(start, cut.after)] })).toMatchObject({
      bins: start,
      steps: [{ kept: false, why: 'It would leave a bin without a good or without a bad.' }],
    });
  });

  it('concern the edit alone where its cuts cannot be counted', () => {
    const broken = { ...fine, edges: [10, 20] };
    const edits = [kept(start, { ...start, edges: [10, 30] }), made(start, moveMissing(start, 1, ''))];
    const { bins, steps } = carryEdits({ ...fine, development: slots([0, 20, 30, 40, 50, 60, 5, 5, 5], [30, 25, 20, 15, 10, 5, 5, 5, 5]) }, start, { fine: broken, edits }); // prettier-ignore
    expect(steps).toMatchObject([{ kept: false, why: /^It cannot be made on these bins: The cut at 30 / }, { kept: true }]);
    expect(bins).toEqual({ ...start, missing: 1 });
  });

  const home: FineClasses = {
    kind: 'categorical', edges: [], closed: 'left', range: null, categories: ['rent', 'owner', 'parents', 'hostel'], special: [],
    development: slots([50, 90, 30, 5, 5, 0], [30, 10, 10, 5, 5, 0]), holdOut: noCounts, outOfTime: null,
  }; // prettier-ignore
  const homes: CategoricalBins = { kind: 'categorical', groups: [['owner'], ['parents'], ['rent'], ['hostel']], special: [], missing: 'own', unseen: 'neutral' }; // prettier-ignore
  const theirs = made(homes, groupCategories(home, homes, ['owner', 'parents'], 0));
  const mine = made(homes, groupCategories(home, homes, ['rent', 'hostel'], 2));
  const edits = [theirs, kept(theirs.after, homes), mine];

  it('part categories again that the other had put together, and say once what was put with what', () => {
    expect(theirs.what).toBe('Grouped parents with owner');
    // The same homes with other risks: what is safest here was riskiest there.
    const turned = { ...home, categories: ['owner', 'rent', 'hostel', 'parents'], development: slots([50, 90, 30, 5, 5, 0], [80, 10, 10, 5, 5, 0]) }; // prettier-ignore
    const now: CategoricalBins = { ...homes, groups: [['rent', 'hostel'], ['parents'], ['owner']] };
    const { bins, steps } = carryEdits(turned, now, { fine: home, edits });
    expect(bins).toEqual({ ...homes, groups: [['rent', 'hostel'], ['parents'], ['owner']] });
    expect(steps.map((step) => (step.kept ? step.what : step.why))).toEqual([
      'Grouped parents with owner',
      'Groups as they were kept: owner; parents; rent; hostel',
      'Grouped hostel with rent',
    ]);
  });

  it('take what they replaced away with them where they have no place on other categories', () => {
    const shipped = { ...home, categories: ['rent', 'owner', 'parents', 'hostel', 'ship'], development: slots([50, 90, 30, 5, 5, 5, 0], [30, 10, 10, 5, 5, 5, 0]) }; // prettier-ignore
    const now: CategoricalBins = { ...homes, groups: [...homes.groups, ['ship']] };
    const { bins, steps } = carryEdits(shipped, now, { fine: home, edits });
    expect(bins).toMatchObject({
      groups: expect.arrayContaining([['owner'], ['parents'], ['rent', 'hostel'], ['ship']]) as unknown,
    });
    expect(steps).toMatchObject([
      { kept: false, why: 'A later edit put other bins in its place: “Kept own bins over those of Colin”.' },
      { kept: false, why: 'Its groups have no place on other categories (ship); what they replaced is not carried over either.' },
      { kept: true, what: 'Grouped hostel with rent' },
    ]);
    // What both had in common before they parted stays; so do their own edits.
    const shared = made(homes, moveUnseen(homes, 0, 'owner'));
    const over = made(shared.after, mergeGroups(home, shared.after as CategoricalBins, 0, 1));
    const history = [shared, over, kept(over.after, shared.after)];
    expect(carryEdits(shipped, now, { fine: home, edits: history }).bins).toEqual(
      carryEdits(shipped, now, { fine: home, edits: [shared] }).bins,
    );
  });
});
