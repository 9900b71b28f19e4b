import type { BinningHistory } from '@tallystone/contracts/binnings/schema';
import { changeWords, endWords, historyFinding, stateWords } from './history-words';

const edit: BinningHistory['edits'][number] = {
  id: '33333333-3333-4333-8333-333333333333',
  characteristicId: '11111111-1111-4111-8111-111111111111',
  column: 'utilisation',
  kind: 'cut moved',
  what: 'Cut moved from 40 to 45',
  before: { kind: 'numeric', edges: [-20, 40], special: ['own'], missing: 'own' },
  after: { kind: 'numeric', edges: [-20, 45], special: ['own'], missing: 'own' },
  reason: { code: 'round number', text: '' },
  by: 'Marian',
  at: '2026-03-01T10:00:00.000Z',
  inEffect: true,
  carriedFrom: null,
  notCarried: null,
  ended: null,
};
const ended = { how: 'undone', by: 'Colin', at: '2026-03-01T11:00:00.000Z', reason: null } as const;

describe('the history of edits in words', () => {
  it('counts what is in effect and what says no reason yet', () => {
    expect(historyFinding([])).toBe('The bins are as they were classed automatically.');
    expect(historyFinding([edit, { ...edit, inEffect: false, ended }])).toBe('1 edit of 2 is in effect, each with its reason.');
    expect(historyFinding([{ ...edit, reason: null }, edit])).toBe('2 edits of 2 are in effect, 1 without a reason yet.');
    expect(historyFinding([{ ...edit, inEffect: false, ended }])).toBe('No edit by hand is in effect, of 1 in the history.');
  });

  it('says how an edit stands and who took it back', () => {
    expect([stateWords(edit), endWords(edit)]).toEqual(['in effect', null]);
    const undone = { ...edit, inEffect: false, ended };
    expect(stateWords(undone)).toBe('undone');
    expect(endWords(undone)).toMatch(/^Colin, 1\sMar/);
    const anew = { ...undone, ended: { ...ended, how: 'classed anew' as const, reason: 'Fewer bins' } };
    expect(stateWords(anew)).toBe('classed anew');
    expect(endWords(anew)).toMatch(/: Fewer bins$/);
    const carriedFrom = { binning: 'First binning', by: 'Marian', at: edit.at };
    expect(stateWords({ ...edit, carriedFrom })).toBe('carried over from First binning');
    const lost = { ...edit, inEffect: false, carriedFrom, notCarried: 'Its categories are gone.' };
    expect([stateWords(lost), endWords(lost)]).toEqual(['not carried over', 'Its categories are gone.']);
  });

  it('shows the cuts where they changed, else the place of what was moved', () => {
    expect(changeWords(edit)).toEqual({ before: '\u221220 | 40', after: '\u221220 | 45' });
    expect(changeWords({ before: edit.before, after: { ...edit.before, missing: 1 } })).toEqual({
      before: 'missing in a bin of its own',
      after: 'missing in bin 2',
    });
    const groups = {
      kind: 'categorical',
      groups: [['own'], ['rent', 'parents']],
      special: [],
      missing: 'own',
      unseen: 'neutral',
    } as const;
    const bins = { ...groups, groups: groups.groups.map((group) => [...group]), special: [] };
    expect(changeWords({ before: bins, after: { ...bins, unseen: 0 } })).toEqual({
      before: 'unseen neutral',
      after: 'unseen in bin 1',
    });
    expect(changeWords({ before: bins, after: { ...bins, groups: [['own', 'rent', 'parents']] } }).after).toBe(
      'own, rent, parents',
    );
  });
});
