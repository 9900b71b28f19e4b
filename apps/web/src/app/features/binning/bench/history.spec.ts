import { addCut, mergeNumeric, moveCut, type FineClasses, type NumericBins } from '@tallystone/numeric/bench';
import { utilisation } from '../testing/characteristics';
import {
  act,
  begin,
  currentBins,
  explain,
  keepMine,
  mostSteps,
  redo,
  reset,
  toSave,
  undo,
  unexplained,
  type History,
} from './history';

const fine: FineClasses = utilisation.fine;
const automatic: NumericBins = { kind: 'numeric', edges: [20, 40], special: ['own'], missing: 'own' };
let clock = 0;
let ids = 0;
const later = (history: History, make: (bins: NumericBins) => ReturnType<typeof moveCut>, after = 5000): History => {
  clock += after;
  const edit = make(currentBins(history) as NumericBins);
  if (!edit) throw new Error('The edit cannot be done');
  return act(history, edit, `id-${ids++}`, clock);
};

describe('the history of a bench', () => {
  it('chains edits from the automatic bins and takes them back', () => {
    let history = begin(automatic, []);
    history = later(history, (bins) => addCut(fine, bins, 60));
    history = later(history, (bins) => mergeNumeric(fine, bins, 0));
    expect(currentBins(history)).toEqual({ ...automatic, edges: [40, 60] });
    expect(history.edits[0].before).toEqual(automatic);
    expect(history.edits[1].before).toEqual(history.edits[0].after);
    const back = undo(undo(history));
    expect(currentBins(back)).toEqual(automatic);
    expect(toSave(back)).toEqual({ bins: automatic, edits: [] });
    expect(redo(redo(back)).edits).toEqual(history.edits);
    expect(undo(back)).toBe(back);
    expect(redo(history)).toBe(history);
  });

  it('keeps fifty steps', () => {
    let history = begin(automatic, []);
    for (let step = 0; step < 60; step++) history = later(history, (bins) => moveCut(fine, bins, 0, step % 2 === 0 ? 10 : 20));
    for (let step = 0; step < mostSteps; step++) history = undo(history);
    expect(history.edits).toHaveLength(60 - mostSteps);
    expect(undo(history)).toBe(history);
    for (let step = 0; step < mostSteps; step++) history = redo(history);
    expect(history.edits).toHaveLength(60);
  });

  it('takes quick moves of one cut as one edit, and none when it is back where it was', () => {
    let history = begin(automatic, []);
    history = later(history, (bins) => moveCut(fine, bins, 0, 30));
    history = later(history, (bins) => moveCut(fine, bins, 0, 10), 300);
    expect(history.edits).toMatchObject([{ what: 'Cut moved from 20 to 10', before: automatic, after: { edges: [10, 40] } }]);
    expect(currentBins(undo(history))).toEqual(automatic);
    history = later(history, (bins) => moveCut(fine, bins, 0, 20), 300);
    expect(history.edits).toEqual([]);
    expect(undo(history)).toBe(history);
    history = later(history, (bins) => moveCut(fine, bins, 0, 10));
    history = later(history, (bins) => moveCut(fine, bins, 1, 60), 300);
    expect(history.edits).toHaveLength(2);
  });

  it('a new edit ends what could be redone', () => {
    let history = later(begin(automatic, []), (bins) => addCut(fine, bins, 60));
    history = undo(history);
    history = later(history, (bins) => addCut(fine, bins, 80));
    expect(redo(history)).toBe(history);
  });

  it('gives reasons that undo does not take away', () => {
    let history = later(begin(automatic, []), (bins) => addCut(fine, bins, 60));
    const [{ id }] = history.edits;
    history = later(history, (bins) => addCut(fine, bins, 80));
    history = explain(history, id, { code: 'round number', text: '' });
    expect(unexplained(history)).toBe(1);
    expect(undo(history).edits[0].reason).toEqual({ code: 'round number', text: '' });
    expect(redo(undo(undo(history))).edits[0].reason).toEqual({ code: 'round number', text: '' });
  });

  it('resets to automatic as a step like any other', () => {
    const history = later(begin(automatic, []), (bins) => addCut(fine, bins, 60));
    const fresh = reset(history);
    expect(currentBins(fresh)).toEqual(automatic);
    expect(undo(fresh).edits).toEqual(history.edits);
    expect(reset(fresh)).toBe(fresh);
  });

  it('keeps mine over theirs with one more edit, and theirs stays in the chain', () => {
    const theirs = later(begin(automatic, []), (bins) => addCut(fine, bins, 80));
    const editList = theirs.edits.map((edit) => ({ ...edit, by: 'Colin', at: '2026-01-01T00:00:00Z', inEffect: true })) as never;
    const mine: NumericBins = { ...automatic, edges: [20, 60] };
    const kept = keepMine({ automatic, current: currentBins(theirs), editList, changedBy: 'Colin' }, mine, 'mine');
    expect(kept.edits).toMatchObject([
      { kind: 'cut added' },
      { kind: 'kept own', what: 'Kept own bins over those of Colin', after: mine },
    ]);
    expect(currentBins(undo(kept))).toEqual(currentBins(theirs));
  });
});
