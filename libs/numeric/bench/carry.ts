import { NumericError } from '../errors';
import { asListed, groupCategories, listed, moveUnseen, riskOrder } from './categorical-edits';
import { addCut, mergeNumeric, moveCut, moveMissing, moveSpecial, type EditKind } from './numeric-edits';
import { binOfSlots, coarseCount, layoutOf, sumSlots } from './slots';
import { rangeLabel } from './labels';
import type { Bins, CategoricalBins, FineClasses, NumericBins, Place } from './types';

/** An edit that was made on another sample. "kept own" puts whole bins in place of others. */
export interface EarlierEdit {
  readonly kind: EditKind | 'kept own';
  readonly what: string;
  readonly before: Bins;
  readonly after: Bins;
}

/** Edits of one characteristic of another sample, oldest first, each from where the one before ended. */
export interface EarlierEdits {
  /** The fine classes there: what its special codes are called, and what its bins held. */
  readonly fine: FineClasses;
  readonly edits: readonly EarlierEdit[];
}

/** What became of it: the edit as it reads on these bins, or why it makes no sense here. */
export type CarriedStep =
  | {
      readonly kept: true;
      readonly kind: EditKind | 'kept own';
      readonly what: string;
      readonly before: Bins;
      readonly after: Bins;
    }
  | { readonly kept: false; readonly why: string };

/** Bins with the sentence about them, or why not. `asBefore`: nothing would change, as the bins are like that already. */
type Tried =
  | { readonly kind: EditKind | 'kept own'; readonly what: string; readonly bins: Bins }
  | { readonly why: string; readonly asBefore?: true }
  | string;

/**
 * Values at which the fine classes must be split before edits of a numeric characteristic can be carried over: new places of cuts that development has
 * values on both sides of, and every cut of bins that were put in place of others as a whole. Those of the latest edits stand first: where there is no
 * room for all of them, they say more of what the bins came to.
 * @example carriedEdges(fine, edits) // [32.5, 27]
 */
export function carriedEdges(fine: FineClasses, edits: readonly EarlierEdit[]): number[] {
  const wanted = [...edits].reverse().flatMap((edit) => {
    const { before, after } = edit;
    if (before.kind !== 'numeric' || after.kind !== 'numeric') return [];
    return replacesAll(edit) ? after.edges : gained(before, after);
  });
  return [...new Set(wanted)].filter((edge) => separates(fine, edge) && !fine.edges.includes(edge));
}

/**
 * Makes edits of an earlier sample on the bins of a new one, each after the one before. Where the bins are those that an edit was made on, they become
 * those that it led to: edits of the very same sample give the very same bins. Elsewhere an edit is kept where what it decided can still be decided: its
 * cut has values on both sides, the cut that it moved or took out has one in its place (the nearest between the same neighbours), its categories and
 * codes are there, and no bin is left without a good or a bad unless it was there. Otherwise it says why not, and the bins stay as they were.
 *
 * An edit that put whole bins in place of others (own ones that were kept) does so here, where the values and categories allow all of it; where they do
 * not, what it replaced is not carried over either.
 *
 * @param fine fine classes of the new sample, split at `carriedEdges`
 * @param start its bins as they were classed
 * @param earlier null where nothing was edited
 * @example carryEdits(fine, bins, { fine: finePast, edits }).steps[0] // { kept: true, what: 'Cut moved from 29.5 to 30', … }
 */
export function carryEdits(fine: FineClasses, start: Bins, earlier: EarlierEdits | null): { bins: Bins; steps: CarriedStep[] } {
  const steps: CarriedStep[] = [];
  if (earlier === null) return { bins: start, steps };
  /** The bins here before each edit, and after the last. */
  const states: Bins[] = [start];
  for (const [index, edit] of earlier.edits.entries()) {
    const bins = states[index];
    const tried = carried(fine, bins, earlier.fine, edit);
    if (typeof tried !== 'string' && 'bins' in tried) {
      steps.push({ kept: true, kind: tried.kind, what: shortened(tried.what), before: bins, after: tried.bins });
      states.push(tried.bins);
      continue;
    }
    const [why, asBefore] = typeof tried === 'string' ? [tried, false] : [tried.why, tried.asBefore];
    steps.push({ kept: false, why });
    const parting = replacesAll(edit) && !asBefore ? partingOf(earlier.edits, index) : index;
    for (let replaced = parting; replaced < index; replaced++) {
      if (steps[replaced].kept)
        steps[replaced] = { kept: false, why: `A later edit put other bins in its place: “${edit.what}”.` };
      states[replaced + 1] = states[parting];
    }
    states.push(states[parting]);
  }
  return { bins: states[states.length - 1], steps };
}

/** The number of edits after which the bins there were those that this edit went back to; none where they had never been. */
function partingOf(edits: readonly EarlierEdit[], index: number): number {
  for (let made = index - 1; made > 0; made--) if (same(edits[made].before, edits[index].after)) return made;
  return 0;
}

const same = (a: Bins, b: Bins): boolean => JSON.stringify(inWrittenOrder(a)) === JSON.stringify(inWrittenOrder(b));
/** Bins that were stored come back with their keys in another order. */
const inWrittenOrder = (bins: Bins): unknown[] =>
  bins.kind === 'numeric' ? [bins.edges, bins.special, bins.missing] : [bins.groups, bins.special, bins.missing, bins.unseen];

/** What is said of an edit has at most so many characters. */
const longestSentence = 500;
const shortened = (what: string): string => (what.length <= longestSentence ? what : `${what.slice(0, longestSentence - 1)}…`);

/** One edit on the bins here. Whatever is wrong with it concerns it alone: the characteristic keeps the bins that it has. */
function carried(fine: FineClasses, bins: Bins, there: FineClasses, edit: EarlierEdit): Tried {
  try {
    const tried = attempt(fine, bins, there, edit);
    if (typeof tried === 'string' || !('bins' in tried)) return tried;
    if (leavesEmpty(fine, bins, tried.bins) && !leavesEmpty(there, edit.before, edit.after))
      return 'It would leave a bin without a good or without a bad.';
    return tried;
  } catch (error) {
    if (error instanceof NumericError) return `It cannot be made on these bins: ${error.message}`;
    throw error;
  }
}

function attempt(fine: FineClasses, bins: Bins, there: FineClasses, edit: EarlierEdit): Tried {
  if (bins.kind !== edit.after.kind) return `It was ${edit.after.kind} then and is ${bins.kind} now.`;
  if (same(bins, edit.before)) {
    const exact = asItWas(fine, there, edit.after);
    if (exact !== null) return { kind: edit.kind, what: edit.what, bins: exact };
  }
  if (replacesAll(edit)) return wholly(fine, bins, there, edit.after);
  if (edit.kind === 'special moved') return special(fine, bins, there, edit);
  if (edit.kind === 'missing moved') {
    const place = placeHere(fine, bins, edit.after, edit.after.missing);
    if (place === null) return 'The bin that missing values joined has no rows here.';
    return moveMissing(bins, place, labelOf(fine, bins, place)) ?? 'Missing values are there already.';
  }
  if (bins.kind === 'numeric' && edit.before.kind === 'numeric' && edit.after.kind === 'numeric')
    return numeric(fine, bins, edit.before, edit.after);
  if (bins.kind === 'categorical' && edit.before.kind === 'categorical' && edit.after.kind === 'categorical')
    return categorical(fine, bins, edit.kind, edit.before, edit.after);
  return 'It was of another kind.';
}

/** Whether an edit puts whole bins in place of others, rather than changing one thing about them. */
function replacesAll({ kind, before, after }: EarlierEdit): boolean {
  if (kind === 'kept own') return true;
  if (before.kind !== 'numeric' || after.kind !== 'numeric') return false;
  return gained(before, after).length > 1 || gained(after, before).length > 1;
}

/** The bins as they were there, where nothing stands against any part of them; null otherwise. */
function asItWas(fine: FineClasses, there: FineClasses, after: Bins): Bins | null {
  if (JSON.stringify(fine.special) !== JSON.stringify(there.special)) return null;
  if (after.kind === 'numeric')
    return after.edges.every((edge) => separates(fine, edge) && fine.edges.includes(edge)) ? after : null;
  return categoriesApart(fine, after).length === 0 ? arranged(fine, there, after) : null;
}

/** Categories that are in the groups and not in the sample, or the other way round. */
function categoriesApart(fine: FineClasses, { groups }: CategoricalBins): string[] {
  const grouped = new Set(groups.flat());
  const here = new Set(fine.categories);
  return [...[...grouped].filter((category) => !here.has(category)), ...fine.categories.filter((one) => !grouped.has(one))];
}

/** The same groups as they stand in this sample: in order of risk. Untouched where both samples have them in one order. */
function arranged(fine: FineClasses, there: FineClasses, bins: CategoricalBins): CategoricalBins {
  const inRisk = (of: FineClasses) => riskOrder(of, bins.groups).map((group) => asListed(of, bins.groups[group]));
  const groups = inRisk(fine);
  if (JSON.stringify(groups) === JSON.stringify(inRisk(there))) return bins;
  const order = riskOrder(fine, bins.groups);
  const move = (place: Place): Place => (place === 'own' ? 'own' : order.indexOf(place));
  return {
    ...bins,
    groups,
    special: bins.special.map(move),
    missing: move(bins.missing),
    unseen: bins.unseen === 'neutral' ? 'neutral' : order.indexOf(bins.unseen),
  };
}

const gained = (before: NumericBins, after: NumericBins): number[] => after.edges.filter((edge) => !before.edges.includes(edge));
const separates = ({ range }: FineClasses, edge: number): boolean => range !== null && edge > range[0] && edge <= range[1];

/** Said where a fine class would have to be split and cannot be. */
const noRoom = (fine: FineClasses, edge: number): string =>
  `There is no room for a cut at ${edge}: it lies inside a fine class, and there are ${fine.edges.length + 1} of them, the most there can be.`;

function numeric(fine: FineClasses, bins: NumericBins, before: NumericBins, after: NumericBins): Tried {
  const [to] = gained(before, after);
  const [from] = gained(after, before);
  if (to !== undefined) {
    if (!separates(fine, to)) return `Development has values on one side of ${to} only.`;
    if (bins.edges.includes(to)) return `There is a cut at ${to} already.`;
    if (!fine.edges.includes(to)) return noRoom(fine, to);
  }
  if (from === undefined) return (to !== undefined && addCut(fine, bins, to)) || 'Nothing in it applies to these bins.';
  const cut = cutFor(bins, before, from);
  if (cut === null) return `No cut lies where the one at ${from} lay.`;
  if (to === undefined) return mergeNumeric(fine, bins, cut) ?? `No cut lies where the one at ${from} lay.`;
  return moveCut(fine, bins, cut, to) ?? `Moved to ${to}, the cut would pass its neighbour.`;
}

/** The cut here that stands for one there: the nearest to it between the same neighbours. */
function cutFor(bins: NumericBins, before: NumericBins, from: number): number | null {
  const at = before.edges.indexOf(from);
  const [low, high] = [before.edges[at - 1] ?? -Infinity, before.edges[at + 1] ?? Infinity];
  let best: number | null = null;
  bins.edges.forEach((edge, cut) => {
    if (edge <= low || edge >= high) return;
    if (best === null || Math.abs(edge - from) < Math.abs(bins.edges[best] - from)) best = cut;
  });
  return best;
}

/** Whole bins in place of these: cuts or groups, and where special codes, missing and unseen go. Cuts beyond the values here part nobody and are not made. */
function wholly(fine: FineClasses, bins: Bins, there: FineClasses, after: Bins): Tried {
  const whole = after.kind === 'numeric' ? whollyNumeric(fine, there, after) : whollyCategorical(fine, there, after);
  if (typeof whole === 'string') return whole;
  if (same(whole.bins, bins)) return { why: 'The bins are like that already.', asBefore: true };
  return { kind: 'kept own', ...whole };
}

type Whole = { readonly what: string; readonly bins: Bins } | string;

function whollyNumeric(fine: FineClasses, there: FineClasses, after: NumericBins): Whole {
  const edges = after.edges.filter((edge) => separates(fine, edge));
  if (edges.length === 0 && after.edges.length > 0) return 'None of its cuts has values on both sides.';
  const inside = edges.find((edge) => !fine.edges.includes(edge));
  if (inside !== undefined) return noRoom(fine, inside);
  /** The bin here that a bin there is; null where no value here lies in it. */
  const move = (place: Place): Place | null => {
    if (place === 'own') return 'own';
    const [from, to] = [after.edges[place - 1] ?? -Infinity, after.edges[place] ?? Infinity];
    if (fine.range === null || to <= fine.range[0] || from > fine.range[1]) return null;
    return edges.filter((edge) => edge <= from).length;
  };
  const special = specialHere(fine, there, after).map(move);
  const lost = special.indexOf(null);
  if (lost >= 0) return `The bin that ${fine.special[lost]} joined has no rows here.`;
  const missing = move(after.missing);
  if (missing === null) return 'The bin that missing values joined has no rows here.';
  const beyond = after.edges.filter((edge) => !edges.includes(edge));
  const without = beyond.length === 0 ? '' : `, without ${listed(beyond.map(String))}, beyond which there is no value`;
  return {
    what: `Bins as they were kept: ${edges.length === 0 ? 'no cut' : `cuts at ${listed(edges.map(String), 8)}`}${without}`,
    bins: { kind: 'numeric', edges, special: special.flatMap((place) => place ?? []), missing },
  };
}

function whollyCategorical(fine: FineClasses, there: FineClasses, after: CategoricalBins): Whole {
  const apart = categoriesApart(fine, after);
  if (apart.length > 0)
    return `Its groups have no place on other categories (${listed(apart)}); what they replaced is not carried over either.`;
  const groups = after.groups.map((group) => listed(group));
  return {
    what: `Groups as they were kept: ${groups.slice(0, 6).join('; ')}${groups.length > 6 ? `; and ${groups.length - 6} more` : ''}`,
    bins: arranged(fine, there, { ...after, special: specialHere(fine, there, after) }),
  };
}

/** Where the special codes of this sample went there, by their labels; one that was none there has a bin of its own. */
function specialHere(fine: FineClasses, there: FineClasses, after: Bins): Place[] {
  return fine.special.map((label) => after.special[there.special.indexOf(label)] ?? 'own');
}

function categorical(
  fine: FineClasses,
  bins: CategoricalBins,
  kind: EarlierEdit['kind'],
  before: CategoricalBins,
  after: CategoricalBins,
): Tried {
  if (kind === 'unseen moved') {
    const place = after.unseen === 'neutral' ? 'neutral' : placeHere(fine, bins, after, after.unseen);
    if (place === null || place === 'own') return 'The group that unseen categories joined has no rows here.';
    return (
      moveUnseen(bins, place, place === 'neutral' ? '' : labelOf(fine, bins, place)) ?? 'Unseen categories are there already.'
    );
  }
  const known = new Set(before.groups.map((group) => sameText(group)));
  const made = after.groups.filter((group) => !known.has(sameText(group)));
  if (kind === 'categories grouped' || kind === 'bins merged') {
    // The group that grew; another may have shrunk.
    const grown = made.find((group) => !before.groups.some((old) => group.every((category) => old.includes(category))));
    const here = (grown ?? []).filter((category) => fine.categories.includes(category));
    if (here.length < 2) return 'Fewer than two of its categories are in this sample.';
    const target = bins.groups.findIndex((group) => group.includes(here[0]));
    return groupCategories(fine, bins, here, target) ?? 'Its categories are in one group already.';
  }
  // Set apart, or the smaller part of a split: a part of one group before.
  const [apart] = made
    .filter((group) =>
      before.groups.some((old) => old.length > group.length && group.every((category) => old.includes(category))),
    )
    .sort((a, b) => a.length - b.length);
  const here = (apart ?? []).filter((category) => fine.categories.includes(category));
  if (here.length === 0) return 'None of its categories is in this sample.';
  return groupCategories(fine, bins, here, 'new') ?? 'Its categories stand apart already.';
}

const sameText = (group: readonly string[]): string => JSON.stringify([...group].sort());

function special(fine: FineClasses, bins: Bins, there: FineClasses, edit: EarlierEdit): Tried {
  const moved = edit.after.special.findIndex((place, code) => place !== edit.before.special[code]);
  if (moved < 0) return 'It moved no special code.';
  const label = there.special[moved];
  const code = fine.special.indexOf(label);
  if (code < 0) return `"${label}" is no special code here.`;
  const place = placeHere(fine, bins, edit.after, edit.after.special[moved]);
  if (place === null) return `The bin that ${label} joined has no rows here.`;
  return moveSpecial(fine, bins, code, place, labelOf(fine, bins, place)) ?? `${label} is there already.`;
}

/** The bin here that shares most rows with a bin there; null where none does. */
function placeHere(fine: FineClasses, bins: Bins, there: Bins, place: Place): Place | null {
  if (place === 'own') return 'own';
  const slots = binOfSlots(fine, bins);
  const rows = new Float64Array(coarseCount(bins));
  const inside = (slot: number): boolean => {
    if (there.kind === 'categorical') return there.groups[place]?.includes(fine.categories[slot]) ?? false;
    const from = slot === 0 ? (fine.range?.[0] ?? -Infinity) : fine.edges[slot - 1];
    return from >= (there.edges[place - 1] ?? -Infinity) && from < (there.edges[place] ?? Infinity);
  };
  const classes = fine.kind === 'numeric' ? fine.edges.length + 1 : fine.categories.length;
  for (let slot = 0; slot < classes; slot++) if (inside(slot)) rows[slots[slot]] += fine.development.rows[slot];
  const most = rows.indexOf(Math.max(...rows));
  return rows[most] > 0 ? most : null;
}

function labelOf(fine: FineClasses, bins: Bins, place: Place): string {
  if (place === 'own') return '';
  return bins.kind === 'numeric' ? rangeLabel(bins.edges, place, fine.closed) : listed(bins.groups[place]);
}

/** Whether an edit leaves more bins without a good or a bad than there were. */
function leavesEmpty(fine: FineClasses, before: Bins, after: Bins): boolean {
  const empty = (of: Bins): number => {
    const sums = sumSlots(fine.development, binOfSlots(fine, of), layoutOf(of).length);
    return sums.rows.slice(0, coarseCount(of)).filter((_, bin) => sums.goods[bin] === 0 || sums.bads[bin] === 0).length;
  };
  return empty(after) > empty(before);
}
