import { groupCategories, moveUnseen } from './categorical-edits';
import { addCut, mergeNumeric, moveCut, moveMissing, moveSpecial, type EditKind } from './numeric-edits';
import { binOfSlots, coarseCount, layoutOf, sumSlots } from './slots';
import { rangeLabel } from './labels';
import type { Bins, CategoricalBins, FineClasses, NumericBins, Place } from './types';

/** An edit that was made on another sample. */
export interface EarlierEdit {
  readonly kind: EditKind | 'kept own';
  readonly before: Bins;
  readonly after: Bins;
  /** Labels of the special codes there, in the order of its bins. */
  readonly special: readonly string[];
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

type Tried = { readonly kind: EditKind | 'kept own'; readonly what: string; readonly bins: Bins } | string;

/**
 * Values at which the fine classes must be split before edits of a numeric characteristic can be carried over: new places of cuts that development has
 * values on both sides of, and every cut of bins that were put in place of others as a whole. Those of the latest edits stand first: where there is no
 * room for all of them, they say more of what the bins came to.
 * @example carriedEdges(fine, edits) // [32.5, 27]
 */
export function carriedEdges(fine: FineClasses, edits: readonly EarlierEdit[]): number[] {
  const wanted = [...edits].reverse().flatMap(({ kind, before, after }) => {
    if (before.kind !== 'numeric' || after.kind !== 'numeric') return [];
    return replacesAll(kind, before, after) ? after.edges : gained(before, after);
  });
  return [...new Set(wanted)].filter((edge) => separates(fine, edge) && !fine.edges.includes(edge));
}

/**
 * Makes edits of an earlier sample on the bins of a new one, each after the one before. An edit is kept where what it decided can still be decided: its
 * cut has values on both sides, the cut that it moved or took out has one in its place (the nearest between the same neighbours), its categories and
 * codes are there, and no bin is left without a good or a bad. Otherwise it says why not, and the bins stay as they were.
 *
 * @param fine fine classes of the new sample, split at `carriedEdges`
 * @param start its bins as they were classed
 * @example carryEdits(fine, bins, edits).steps[0] // { kept: true, what: 'Cut moved from 29.5 to 30', … }
 */
export function carryEdits(fine: FineClasses, start: Bins, edits: readonly EarlierEdit[]): { bins: Bins; steps: CarriedStep[] } {
  let bins = start;
  const steps = edits.map((edit): CarriedStep => {
    const tried = attempt(fine, bins, edit);
    if (typeof tried === 'string') return { kept: false, why: tried };
    const empty = emptyBin(fine, tried.bins, bins);
    if (empty !== null) return { kept: false, why: empty };
    const before = bins;
    bins = tried.bins;
    return { kept: true, kind: tried.kind, what: tried.what, before, after: bins };
  });
  return { bins, steps };
}

function attempt(fine: FineClasses, bins: Bins, edit: EarlierEdit): Tried {
  if (bins.kind !== edit.after.kind) return `It was ${edit.after.kind} then and is ${bins.kind} now.`;
  if (edit.kind === 'special moved') return special(fine, bins, edit);
  if (edit.kind === 'missing moved') {
    const place = placeHere(fine, bins, edit.after, edit.after.missing);
    if (place === null) return 'The bin that missing values joined has no rows here.';
    return moveMissing(bins, place, labelOf(fine, bins, place)) ?? 'Missing values are there already.';
  }
  if (bins.kind === 'numeric' && edit.before.kind === 'numeric' && edit.after.kind === 'numeric')
    return numeric(fine, bins, edit.kind, edit.before, edit.after);
  if (bins.kind === 'categorical' && edit.before.kind === 'categorical' && edit.after.kind === 'categorical')
    return categorical(fine, bins, edit.kind, edit.before, edit.after);
  return 'It was of another kind.';
}

const gained = (before: NumericBins, after: NumericBins): number[] => after.edges.filter((edge) => !before.edges.includes(edge));
const separates = ({ range }: FineClasses, edge: number): boolean => range !== null && edge > range[0] && edge <= range[1];

/** Whether an edit puts whole bins in place of others, rather than changing one thing about them. */
function replacesAll(kind: EarlierEdit['kind'], before: NumericBins, after: NumericBins): boolean {
  return kind === 'kept own' || gained(before, after).length > 1 || gained(after, before).length > 1;
}

/** Said where a fine class would have to be split and cannot be. */
const noRoom = (fine: FineClasses, edge: number): string =>
  `There is no room for a cut at ${edge}: it lies inside a fine class, and there are ${fine.edges.length + 1} of them, the most there can be.`;

function numeric(
  fine: FineClasses,
  bins: NumericBins,
  kind: EarlierEdit['kind'],
  before: NumericBins,
  after: NumericBins,
): Tried {
  if (replacesAll(kind, before, after)) return wholly(fine, bins, after);
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

/** All cuts of the earlier bins that have values on both sides here. */
function wholly(fine: FineClasses, bins: NumericBins, after: NumericBins): Tried {
  const edges = after.edges.filter((edge) => separates(fine, edge));
  if (edges.length === 0) return 'None of its cuts has values on both sides.';
  if (edges.join() === bins.edges.join()) return 'The cuts are there already.';
  const inside = edges.find((edge) => !fine.edges.includes(edge));
  if (inside !== undefined) return noRoom(fine, inside);
  const own = (place: Place): Place => (typeof place === 'number' && place > edges.length ? 'own' : place);
  return {
    kind: 'kept own',
    what: `Cuts as they were: ${edges.join(', ')}`,
    bins: { ...bins, edges, special: bins.special.map(own), missing: own(bins.missing) },
  };
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
  if (kind === 'kept own') return 'It kept one person’s groups over another’s, which cannot be repeated on other categories.';
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

function special(fine: FineClasses, bins: Bins, edit: EarlierEdit): Tried {
  const moved = edit.after.special.findIndex((place, code) => place !== edit.before.special[code]);
  const label = edit.special[moved];
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
  return bins.kind === 'numeric' ? rangeLabel(bins.edges, place, fine.closed) : bins.groups[place].join(', ');
}

/** Says so where an edit leaves more bins without a good or a bad than there were. */
function emptyBin(fine: FineClasses, bins: Bins, earlier: Bins): string | null {
  const empty = (of: Bins): number => {
    const sums = sumSlots(fine.development, binOfSlots(fine, of), layoutOf(of).length);
    return sums.rows.slice(0, coarseCount(of)).filter((_, bin) => sums.goods[bin] === 0 || sums.bads[bin] === 0).length;
  };
  return empty(bins) > empty(earlier) ? 'It would leave a bin without a good or without a bad.' : null;
}
