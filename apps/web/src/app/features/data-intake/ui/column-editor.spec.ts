import { type ComponentFixture, TestBed } from '@angular/core/testing';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn } from '@tallystone/contracts/samples/definition';
import { ColumnEditor } from './column-editor';

describe('the part of one column', () => {
  let fixture: ComponentFixture<ColumnEditor>;
  const profile: ColumnProfile = {
    position: 0,
    column: 'amount',
    kind: 'numeric',
    rows: 200,
    distinct: 199,
    missing: 0,
    missingTokens: [],
    specialSuspects: [],
    mostFrequent: [],
    valuesComplete: false,
    numeric: null,
    date: null,
    text: null,
    flags: [{ code: 'unreadable-numbers', weight: 'look', finding: '6 of 200 values are no numbers.', values: ['NaN', ' ', 'Inf', '0x10', '1e309', '-Inf'] }],
    suggestedRole: 'characteristic',
    suggestedProtected: false,
    suggestion: 'Nothing speaks against it.',
    hashed: false,
  }; // prettier-ignore
  const buttons = (): HTMLButtonElement[] => [
    ...(fixture.nativeElement as HTMLElement).querySelectorAll<HTMLButtonElement>('.flags button'),
  ];

  beforeEach(() => {
    fixture = TestBed.createComponent(ColumnEditor);
    fixture.componentRef.setInput('profile', profile);
  });

  it('offers to read again with all that is no number as missing', () => {
    const told: (readonly string[])[] = [];
    fixture.componentInstance.readAgain.subscribe((values) => told.push(values));
    fixture.componentRef.setInput('mayRead', true);
    fixture.detectChanges();
    expect(buttons().map(({ textContent }) => textContent.trim())).toEqual([
      'Read again with NaN, (blank), Inf, 0x10 and 2 more as missing',
    ]);
    buttons()[0].click();
    expect(told).toEqual([profile.flags[0].values]);
  });

  describe('with special codes', () => {
    const told: DefinedColumn[] = [];
    const column: DefinedColumn = { column: 'amount', kind: 'numeric', role: 'characteristic', protected: false, citation: null, special: [], reason: null };
    const text = (): string => (fixture.nativeElement as HTMLElement).querySelector('fieldset')?.textContent ?? '';
    const press = (label: string): void => {
      const all = [...(fixture.nativeElement as HTMLElement).querySelectorAll('button')];
      all.find(({ textContent }) => textContent.trim() === label)?.click();
      show(told.at(-1)!);
    };
    const show = (defined: DefinedColumn): void => {
      fixture.componentRef.setInput('column', defined);
      fixture.detectChanges();
    };
    const type = (place: number, typed: string): void => {
      const input = (fixture.nativeElement as HTMLElement).querySelectorAll<HTMLInputElement>('.code input')[place];
      input.value = typed;
      input.dispatchEvent(new Event('change'));
      fixture.detectChanges();
    };

    beforeEach(() => {
      told.length = 0;
      fixture.componentRef.setInput('editable', true);
      fixture.componentRef.setInput('profile', { ...profile, specialSuspects: [{ value: '-999', count: 12, reason: 'Far below all others.' }] });
      fixture.componentInstance.changed.subscribe((change) => told.push(change));
      show(column);
    });

    it('asks for the meaning of each, and never takes an empty one for a meaning', () => {
      press('Treat as special code');
      expect(told.at(-1)?.special).toEqual([{ label: 'meaning to be stated', values: [-999] }]);
      expect(text()).toContain('Say what -999 means: no definition is confirmed before.');
      type(1, 'no bureau record');
      show(told.at(-1)!);
      expect(text()).not.toContain('Say what');
      type(1, ' ');
      expect(told.at(-1)?.special).toEqual([{ label: 'meaning to be stated', values: [-999] }]);
    });

    it('takes numbers and words as codes of numbers, and says what it did not take', () => {
      press('Treat as special code');
      const before = told.length;
      for (const typed of ['1’000', '-999, 1 000', '', '1 000']) type(0, typed);
      expect(told).toHaveLength(before);
      expect(text()).toContain('A code is a number such as -999');
      type(0, '-999, -998.5, NTC');
      expect(told.at(-1)?.special[0].values).toEqual([-999, -998.5, 'NTC']);
    });

    it('offers words among numbers as codes, each to be named', () => {
      press('Take NaN, Inf, 0x10, 1e309 and 1 more for special codes');
      expect(told.at(-1)?.kind).toBe('numeric');
      expect(told.at(-1)?.special.map(({ values }) => values)).toEqual([['NaN'], ['Inf'], ['0x10'], ['1e309'], ['-Inf']]);
      expect(text()).toContain('Say what NaN means');
      expect((fixture.nativeElement as HTMLElement).querySelector('.flags')?.textContent).not.toContain('for special codes');
    });

    it('lets a suspected code be an amount, and asks again', () => {
      press('It is an amount');
      expect(told.at(-1)?.amounts).toEqual(['-999']);
      expect(text()).toContain('-999: an amount, as was stated.');
      expect(text()).not.toContain('Treat as special code');
      press('Ask again');
      expect(told.at(-1)?.amounts).toEqual([]);
      expect(text()).toContain('Treat as special code');
    });
  });

  it('offers it to nobody who may not, and only where there is such a value', () => {
    fixture.detectChanges();
    expect(buttons()).toEqual([]);
    fixture.componentRef.setInput('mayRead', true);
    fixture.componentRef.setInput('profile', { ...profile, flags: [{ ...profile.flags[0], values: [] }] });
    fixture.detectChanges();
    expect(buttons()).toEqual([]);
  });
});
