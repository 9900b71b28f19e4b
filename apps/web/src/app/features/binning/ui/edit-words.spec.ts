import type { EditKind } from '@tallystone/contracts/binnings/edits';
import { home, utilisation } from '../testing/characteristics';
import { editWords, notCarriedWords } from './edit-words';

describe('the sentence of an edit', () => {
  const numeric = (kind: EditKind, what: string): string => editWords({ kind, what, before: utilisation.current });

  it('has its values as they are read everywhere', () => {
    expect(numeric('cut moved', 'Cut moved from 18762.23 to 19000')).toBe('Cut moved from 18\u202F762.23 to 19\u202F000');
    expect(numeric('bins merged', 'Merged under -2500 with -2500 to under 0')).toBe(
      'Merged under \u22122\u202F500 with \u22122\u202F500 to under 0',
    );
    expect(numeric('bin split', 'Split 9000 and over at 12000, into less than the constraints ask for')).toBe(
      'Split 9\u202F000 and over at 12\u202F000, into less than the constraints ask for',
    );
    expect(numeric('missing moved', 'Missing joined to 9000 and over')).toBe('Missing joined to 9\u202F000 and over');
    expect(numeric('kept own', 'Cuts as they were: 9000, 12000')).toBe('Cuts as they were: 9\u202F000, 12\u202F000');
  });

  it('has names as they are', () => {
    expect(numeric('special moved', 'Code 9999 joined to 12000 and over')).toBe('Code 9999 joined to 12\u202F000 and over');
    expect(numeric('special moved', 'Code 9999 set apart in a bin of its own')).toBe('Code 9999 set apart in a bin of its own');
    expect(numeric('kept own', 'Kept own bins over those of Agent 1007')).toBe('Kept own bins over those of Agent 1007');
    const what = 'Grouped 5412, 6011 with 7995';
    expect(editWords({ kind: 'categories grouped', what, before: home.current })).toBe(what);
  });

  it('says why it was not carried over in the same way', () => {
    const edit = { kind: 'cut moved', what: 'Cut moved from 18000 to 19000', before: utilisation.current } as const;
    expect(notCarriedWords({ ...edit, notCarried: 'No cut lies where the one at 18000 lay.' })).toBe(
      'No cut lies where the one at 18\u202F000 lay.',
    );
    const special = { ...edit, kind: 'special moved', notCarried: '"9999" is no special code here.' } as const;
    expect(notCarriedWords(special)).toBe('"9999" is no special code here.');
    expect(notCarriedWords({ ...edit, notCarried: null })).toBeNull();
  });
});
