import type { Edit, EditReason, SentEdit } from '@tallystone/contracts/binnings/edits';
import type { Bins as SavedBins } from '@tallystone/contracts/binnings/bins';
import type { Bins, EditOf, FineClasses } from '@tallystone/numeric/bench';

/** Steps that can be taken back. */
export const mostSteps = 50;
/** Moves of the same cut that follow one another this quickly are one edit. */
export const oneGesture = 2000; // ms

export type BenchEdit = Omit<SentEdit, 'before' | 'after'> & { readonly before: Bins; readonly after: Bins };

/**
 * What to do to the bins as they are when it is done; null where it cannot be. A key that follows another one before the figure has been drawn again is
 * about the bins that the first one left, not about those that are still to be seen.
 */
export type MakeEdit = (fine: FineClasses, bins: Bins) => EditOf<Bins> | null;

/** The bench of one characteristic: automatic bins and the edits on them; past and future states are lists of edits as well. */
export interface History {
  readonly automatic: Bins;
  readonly past: readonly (readonly BenchEdit[])[];
  readonly edits: readonly BenchEdit[];
  readonly future: readonly (readonly BenchEdit[])[];
  /** When the last edit was made, to tell whether the next belongs to the same gesture. */
  readonly lastAt: number;
}

/**
 * The history as it is read: edits in effect lead from the automatic bins to the current ones, so each list of the first of them is a state that was
 * there, and undo goes back through these, whoever made them and whenever.
 */
export function begin(automatic: Bins, edits: readonly (BenchEdit | Edit)[]): History {
  const sent = edits.map(asSent);
  const past = sent.map((_, made) => sent.slice(0, made)).slice(-mostSteps);
  return { automatic, past, edits: sent, future: [], lastAt: -Infinity };
}

export const currentBins = (history: History): Bins => history.edits.at(-1)?.after ?? history.automatic;

/**
 * The history after one more edit; the same history where it changes nothing. A cut that is moved again at once is the same edit, further along; back
 * where it came from, it is none.
 *
 * @param id of the new edit, unique everywhere
 * @param now milliseconds of a clock that never goes back
 */
export function act(history: History, edit: EditOf<Bins>, id: string, now: number): History {
  const last = history.edits.at(-1);
  const before = currentBins(history);
  if (equal(before, edit.bins)) return history;
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

/** The gesture is over: what has been sent stays as it was sent, and a further move of the same cut is an edit of its own. */
export const settled = (history: History): History => ({ ...history, lastAt: -Infinity });

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

/** What was saved meanwhile: by somebody else, or by classing anew. */
export interface Saved {
  readonly automatic: Bins;
  readonly current: Bins;
  readonly editList: readonly (BenchEdit | Edit)[];
}

/**
 * Own bins over those that were saved meanwhile. Their edits stay; one more leads from their bins to those from which the two part, and own edits follow
 * from there as they were made, each with its sentence and reason. Undo takes them back one by one, then that one more, then theirs.
 *
 * @param over whose bins these are put over: "those of Colin"
 * @param newId of an edit, unique everywhere
 */
export function keepMine(theirs: Saved, mine: History, over: string, newId: () => string): History {
  const start = takeTheirs(theirs, mine);
  if (equal(theirs.current, currentBins(mine))) return start;
  let shared = 0;
  // Edits lead on from the automatic bins: after classing anew no edit is the same.
  if (equal(theirs.automatic, mine.automatic))
    while (shared < mine.edits.length && mine.edits[shared].id === start.edits[shared]?.id) shared++;
  const own = mine.edits.slice(shared);
  const parting = own[0]?.before ?? currentBins(mine);
  const kept: BenchEdit = {
    id: newId(),
    kind: 'kept own',
    what: `Kept own bins over ${over}`,
    before: theirs.current,
    after: parting,
    reason: null,
  };
  // An edit that stands in their list at another place is made once more.
  const taken = new Set(start.edits.map(({ id }) => id));
  const made = own.map((edit) => (taken.has(edit.id) ? { ...edit, id: newId() } : edit));
  return begin(theirs.automatic, [...start.edits, ...(equal(theirs.current, parting) ? [] : [kept]), ...made]);
}

/** Their bins; a reason that was given here to an edit of theirs without one stays. */
export function takeTheirs(theirs: Saved, mine: History): History {
  const given = new Map(mine.edits.map(({ id, reason }) => [id, reason]));
  return begin(
    theirs.automatic,
    theirs.editList.map((edit) => ({ ...asSent(edit), reason: edit.reason ?? given.get(edit.id) ?? null })),
  );
}

/** The same history with one more state that undo comes to first: what was let go, which is not lost. */
export function reachable(history: History, letGo: History): History {
  return { ...history, past: [...history.past, history.edits, letGo.edits].slice(-mostSteps) };
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
