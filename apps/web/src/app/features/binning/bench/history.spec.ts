import { addCut, mergeNumeric, moveCut, type FineClasses, type NumericBins } from '@tallystone/numeric/bench';
import { utilisation } from '../testing/characteristics';
import {
  act,
  begin,
  currentBins,
  explain,
  keepMine,
  mostSteps,
  reachable,
  redo,
  reset,
  settled,
  takeTheirs,
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

  it('takes a quick move as an edit of its own once the one before has been sent', () => {
    let history = later(begin(automatic, []), (bins) => moveCut(fine, bins, 0, 30));
    const [sent] = history.edits;
    history = later(settled(history), (bins) => moveCut(fine, bins, 0, 10), 300);
    expect(history.edits[0]).toBe(sent);
    expect(history.edits).toMatchObject([{ what: 'Cut moved from 20 to 30' }, { what: 'Cut moved from 30 to 10' }]);
    expect(undo(history).edits).toEqual([sent]);
  });

  it('has no edit that changes nothing', () => {
    const history = later(begin(automatic, []), (bins) => moveCut(fine, bins, 0, 30));
    const same = { kind: 'cut moved', what: 'Cut moved from 20 to 30', bins: currentBins(history) } as const;
    expect(act(history, same, 'again', clock + 5000)).toBe(history);
    expect(act(history, same, 'at once', clock + 1)).toBe(history);
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

  it('goes back through what is stored, fifty steps at most', () => {
    let history = begin(automatic, []);
    for (let step = 0; step < 60; step++) history = later(history, (bins) => moveCut(fine, bins, 0, step % 2 === 0 ? 10 : 20));
    history = explain(history, history.edits[58].id, { code: 'round number', text: '' });
    let read = begin(automatic, history.edits);
    expect(currentBins(read)).toEqual(currentBins(history));
    for (let made = 59; made >= 60 - mostSteps; made--) {
      read = undo(read);
      expect(read.edits).toEqual(history.edits.slice(0, made));
    }
    expect(undo(read)).toBe(read);
    expect(redo(read).edits).toHaveLength(11);
    // A quick move after reading is an edit of its own: the stored one stays as it was saved.
    const next = later(begin(automatic, history.edits.slice(0, 1)), (bins) => moveCut(fine, bins, 0, 30), 1);
    expect(next.edits).toHaveLength(2);
  });

  describe('when somebody else saved first', () => {
    const newId = (): string => `new-${ids++}`;
    const saved = (history: History) => ({ automatic, current: currentBins(history), editList: history.edits });
    /** Every edit begins where the one before ended: what the server asks of a save. */
    const joins = (history: History): void => {
      let from = history.automatic;
      for (const edit of history.edits) {
        expect(edit.before).toEqual(from);
        from = edit.after;
      }
      expect(new Set(history.edits.map(({ id }) => id)).size).toBe(history.edits.length);
    };
    const shared = later(begin(automatic, []), (bins) => addCut(fine, bins, 80));
    const theirs = later(shared, (bins) => addCut(fine, bins, 90));
    let mine = later(shared, (bins) => mergeNumeric(fine, bins, 0));
    mine = later(mine, (bins) => addCut(fine, bins, 60));
    mine = explain(mine, mine.edits[1].id, { code: 'bin too small', text: 'of old customers' });
    mine = explain(mine, mine.edits[0].id, { code: 'round number', text: '' });

    it('keeps mine with every edit of mine as it was made, and theirs in the chain', () => {
      const kept = keepMine(saved(theirs), mine, 'those of Colin', newId);
      joins(kept);
      expect(currentBins(kept)).toEqual(currentBins(mine));
      expect(kept.edits.map(({ what }) => what)).toEqual([
        'Cut added at 80',
        'Cut added at 90',
        'Kept own bins over those of Colin',
        'Merged under 20 with 20 to under 40',
        'Cut added at 60',
      ]);
      expect(kept.edits.map(({ reason }) => reason?.code ?? null)).toEqual(['round number', null, null, 'bin too small', null]);
      expect(kept.edits[3]).toEqual(mine.edits[1]);
      // Own edits one by one, the one between, and then theirs.
      expect(currentBins(undo(undo(undo(kept))))).toEqual(currentBins(theirs));
    });

    it('needs no edit between where theirs ends at what both began with', () => {
      const kept = keepMine(saved(shared), mine, 'those of Colin', newId);
      expect(kept.edits).toEqual(mine.edits);
      expect(keepMine(saved(mine), mine, 'those of Colin', newId).edits).toEqual(mine.edits);
    });

    it('keeps what was taken back here, and edits that both took back or made again', () => {
      // Mine is one of the stored edits less; theirs has one more.
      const fewer = undo(shared);
      const kept = keepMine(saved(theirs), fewer, 'those of Colin', newId);
      joins(kept);
      expect(kept.edits.map(({ kind }) => kind)).toEqual(['cut added', 'cut added', 'kept own']);
      expect(currentBins(kept)).toEqual(automatic);
      // They took the first edit back that both had: it is made again with mine.
      const without = later(undo(shared), (bins) => addCut(fine, bins, 70));
      const again = keepMine(saved(without), mine, 'those of Colin', newId);
      joins(again);
      expect(again.edits.map(({ id }) => id).slice(2)).toEqual(mine.edits.map(({ id }) => id));
      // They put it behind an edit of their own: it stands in the list already and gets an id of its own.
      const behind = keepMine(saved(without), shared, 'those of Colin', newId);
      const twice = keepMine(saved(behind), mine, 'those of Colin', newId);
      joins(twice);
      expect(currentBins(twice)).toEqual(currentBins(mine));
    });

    it('keeps edits over bins that were classed anew', () => {
      const anew: NumericBins = { ...automatic, edges: [50] };
      const kept = keepMine({ automatic: anew, current: anew, editList: [] }, mine, 'those classed anew', newId);
      joins(kept);
      expect(kept.edits.map(({ kind }) => kind)).toEqual(['kept own', 'cut added', 'bins merged', 'cut added']);
      expect(kept.edits[0]).toMatchObject({ before: anew, after: automatic });
      expect(currentBins(kept)).toEqual(currentBins(mine));
    });

    it('takes theirs with reasons that were given here, and undo comes to mine first', () => {
      const taken = takeTheirs(saved(theirs), mine);
      expect(currentBins(taken)).toEqual(currentBins(theirs));
      expect(taken.edits.map(({ reason }) => reason?.code ?? null)).toEqual(['round number', null]);
      const kept = keepMine(saved(theirs), mine, 'those of Colin', newId);
      const history = reachable(taken, kept);
      expect(history.edits).toEqual(taken.edits);
      expect(undo(history).edits).toEqual(kept.edits);
      expect(undo(undo(history)).edits).toEqual(taken.edits);
      expect(redo(undo(history)).edits).toEqual(taken.edits);
    });
  });
});
