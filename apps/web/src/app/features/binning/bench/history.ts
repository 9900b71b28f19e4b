import type { Edit, EditReason, SentEdit } from '@tallystone/contracts/binnings/edits';
import type { Bins as SavedBins } from '@tallystone/contracts/binnings/bins';
import type { Bins, EditOf } from '@tallystone/numeric/bench';

/** Steps that can be taken back. */
export const mostSteps = 50;
/** Moves of the same cut that follow one another this quickly are one edit. */
export const oneGesture = 2000; // ms

export type BenchEdit = Omit<SentEdit, 'before' | 'after'> & { readonly before: Bins; readonly after: Bins };

/** The bench of one characteristic: automatic bins and the edits on them; past and future states are lists of edits as well. */
export interface History {
  readonly automatic: Bins;
  readonly past: readonly (readonly BenchEdit[])[];
  readonly edits: readonly BenchEdit[];
  readonly future: readonly (readonly BenchEdit[])[];
  /** When the last edit was made, to tell whether the next belongs to the same gesture. */
  readonly lastAt: number;
}

export function begin(automatic: Bins, edits: readonly (BenchEdit | Edit)[]): History {
  return { automatic, past: [], edits: edits.map(asSent), future: [], lastAt: -Infinity };
}

export const currentBins = (history: History): Bins => history.edits.at(-1)?.after ?? history.automatic;

/**
 * The history after one more edit. A cut that is moved again at once is the same edit, further along; back where it came from, it is none.
 *
 * @param id of the new edit, unique everywhere
 * @param now milliseconds of a clock that never goes back
 */
export function act(history: History, edit: EditOf<Bins>, id: string, now: number): History {
  const last = history.edits.at(-1);
  const before = currentBins(history);
  const next: BenchEdit = { id, kind: edit.kind, what: edit.what, before, after: edit.bins, reason: null };
  const gesture =
    last && last.reason === null && now - history.lastAt < oneGesture && history.past.length > 0 && samePull(last, next);
  if (!gesture) return { ...step(history, [...history.edits, next]), lastAt: now };
  const joined = { ...next, before: last.before, what: joinedWords(last, next) };
  const edits = history.edits.slice(0, -1);
  return {
    ...history,
    // The state before the gesture is on the past already.
    edits: equal(joined.before, joined.after) ? edits : [...edits, joined],
    past: equal(joined.before, joined.after) ? history.past.slice(0, -1) : history.past,
    future: [],
    lastAt: now,
  };
}

/** Back to the automatic bins: a step like any other, which undo takes back. */
export function reset(history: History): History {
  return history.edits.length === 0 ? history : { ...step(history, []), lastAt: -Infinity };
}

export function undo(history: History): History {
  const edits = history.past.at(-1);
  if (!edits) return history;
  return {
    ...history,
    past: history.past.slice(0, -1),
    edits,
    future: [history.edits, ...history.future].slice(0, mostSteps),
    lastAt: -Infinity,
  };
}

export function redo(history: History): History {
  const [edits, ...future] = history.future;
  if (!edits) return history;
  return { ...history, past: [...history.past, history.edits].slice(-mostSteps), edits, future, lastAt: -Infinity };
}

/** Gives an edit its reason, in every state that has it: a reason is not something that undo takes away. */
export function explain(history: History, id: string, reason: EditReason | null): History {
  const within = (edits: readonly BenchEdit[]): readonly BenchEdit[] =>
    edits.map((edit) => (edit.id === id ? { ...edit, reason } : edit));
  return { ...history, past: history.past.map(within), edits: within(history.edits), future: history.future.map(within) };
}

export const unexplained = (history: History): number => history.edits.filter((edit) => edit.reason === null).length;

/** What a save sends. */
export function toSave(history: History): { bins: SavedBins; edits: SentEdit[] } {
  return { bins: currentBins(history) as SavedBins, edits: history.edits as SentEdit[] };
}

/** Own bins over those that somebody else saved: their edits stay, and one more leads from theirs to mine. */
export function keepMine(
  theirs: { automatic: Bins; current: Bins; editList: readonly Edit[]; changedBy: string },
  mine: Bins,
  id: string,
): History {
  const start = begin(theirs.automatic, theirs.editList);
  if (equal(theirs.current, mine)) return start;
  const kept: BenchEdit = {
    id,
    kind: 'kept own',
    what: `Kept own bins over those of ${theirs.changedBy}`,
    before: theirs.current,
    after: mine,
    reason: null,
  };
  return step(start, [...start.edits, kept]);
}

function step(history: History, edits: readonly BenchEdit[]): History {
  return { ...history, past: [...history.past, history.edits].slice(-mostSteps), edits, future: [] };
}

function samePull(last: BenchEdit, next: BenchEdit): boolean {
  if (last.kind !== 'cut moved' || next.kind !== 'cut moved') return false;
  const moved = (edit: BenchEdit): number =>
    edit.before.kind === 'numeric' && edit.after.kind === 'numeric'
      ? edit.before.edges.findIndex((edge, index) => edit.after.kind === 'numeric' && edit.after.edges[index] !== edge)
      : -1;
  return moved(last) === moved(next);
}

/** "Cut moved from 30 to 32" and "Cut moved from 32 to 34" are "Cut moved from 30 to 34". */
function joinedWords(last: BenchEdit, next: BenchEdit): string {
  const from = /^Cut moved from (\S+)/.exec(last.what);
  const to = /to (\S+)$/.exec(next.what);
  return from && to ? `Cut moved from ${from[1]} to ${to[1]}` : next.what;
}

const equal = (a: Bins, b: Bins): boolean => JSON.stringify(a) === JSON.stringify(b);

function asSent(edit: BenchEdit | Edit): BenchEdit {
  const { id, kind, what, before, after, reason } = edit;
  return { id, kind, what, before, after, reason };
}
