import { TestBed } from '@angular/core/testing';
import type { CarriedDictionary } from '@tallystone/contracts/samples/dictionary';
import { type TakenOver, TakenOverNote, carriedOver, keptOver } from './taken-over';

const carried: CarriedDictionary = {
  sampleId: 's0',
  fileName: 'applicants-2024.csv',
  columns: ['age', 'home'],
  notCarried: [{ column: 'region', why: 'This sample has no such column.' }],
  wordsFrom: null,
};

describe('what was taken over', () => {
  async function show(note: TakenOver): Promise<HTMLElement> {
    const fixture = TestBed.createComponent(TakenOverNote);
    fixture.componentRef.setInput('note', note);
    await fixture.whenStable();
    return fixture.nativeElement as HTMLElement;
  }
  const words = (element: Element | null): string => element?.textContent?.replace(/\s+/g, ' ').trim() ?? '';

  it('says which sample columns and words come from', () => {
    const from = (wordsFrom: string | null): string => carriedOver({ ...carried, wordsFrom }).words;
    expect(from(null)).toBe(
      'Roles, special codes and words of 2 columns are carried over from applicants-2024.csv: same name and kind.',
    );
    expect(from('applicants-2024.csv')).toBe(
      'Words of 2 columns are carried over from applicants-2024.csv, which has no definition yet: same name and kind.',
    );
    expect(from('applicants-2025.csv')).toBe(
      'Roles and special codes of 2 columns are carried over from applicants-2024.csv, words from applicants-2025.csv: same name and kind.',
    );
  });

  it('lists columns of an earlier sample that are not here behind a line that says how many they are', async () => {
    const note = await show(carriedOver(carried));
    expect(words(note.querySelector('summary'))).toBe('1 column not carried over');
    expect(note.querySelector('details')?.open).toBe(false);
    expect(words(note.querySelector('details li'))).toBe('region This sample has no such column.');
  });

  it('lists at once what could not stay of a draft', async () => {
    const lost = [
      { what: 'region', why: 'is not in the file any more.' },
      { what: 'Exclusion "Staff"', why: 'asks for region.' },
    ];
    const note = await show(keptOver({ columns: ['age'], lost }));
    expect(words(note.querySelector('p'))).toBe('The file was read again: the draft stayed as it was but for 2 points.');
    expect(note.querySelector('details')).toBeNull();
    expect([...note.querySelectorAll('li')].map(words)).toEqual([
      'region is not in the file any more.',
      'Exclusion "Staff" asks for region.',
    ]);
  });

  it('says what values mean here by the earlier definition, and at once what could not be taken from it', async () => {
    const definition = { carried: ['outcome' as const, 'declined' as const], lost: [{ what: 'Outcome', why: '"open" is not in this file.' }] };
    const note = await show(carriedOver({ ...carried, definition }));
    expect(words(note.querySelector('p'))).toMatch(/same name and kind\. So is what their values mean: the outcome, who was declined\.$/);
    expect([...note.querySelectorAll(':scope > ul li')].map(words)).toEqual(['Outcome "open" is not in this file.']);
    expect(carriedOver({ ...carried, definition: { carried: [], lost: [] } }).words).not.toContain('their values mean');
  });

  it('lists nothing where nothing is lost', async () => {
    const kept = await show(keptOver({ columns: ['age'], lost: [] }));
    expect(words(kept)).toBe('The file was read again: the draft stayed as it was.');
    expect((await show(carriedOver({ ...carried, notCarried: [] }))).querySelector('details, ul')).toBeNull();
  });
});
