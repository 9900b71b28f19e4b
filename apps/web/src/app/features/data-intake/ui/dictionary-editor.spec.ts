import { type ComponentFixture, TestBed } from '@angular/core/testing';
import type { DictionaryEntry } from '@tallystone/contracts/samples/dictionary';
import { DictionaryEditor } from './dictionary-editor';

describe('the dictionary of a column', () => {
  let fixture: ComponentFixture<DictionaryEditor>;
  const entry: DictionaryEntry = {
    column: 'utilisation',
    label: 'Card utilisation',
    unit: '%',
    description: '',
    treatments: [{ code: '-999', treatment: 'neutral points' }],
  };
  const fields = (): HTMLInputElement[] => [
    ...(fixture.nativeElement as HTMLElement).querySelectorAll<HTMLInputElement>('input, textarea'),
  ];
  const type = (field: HTMLInputElement, text: string): void => {
    field.value = text;
    field.dispatchEvent(new Event('change'));
  };

  beforeEach(() => {
    fixture = TestBed.createComponent(DictionaryEditor);
    fixture.componentRef.setInput('entry', entry);
    fixture.componentRef.setInput('column', {
      column: 'utilisation',
      kind: 'numeric',
      role: 'characteristic',
      protected: false,
      citation: null,
      special: [{ label: 'no bureau record', values: [-999, -998] }],
      reason: null,
    });
  });

  it('says what is known, with a treatment for each special code, and lets nobody change it who may not', () => {
    fixture.detectChanges();
    expect(fields().map(({ value }) => value)).toEqual(['Card utilisation', '%', '', 'neutral points', '']);
    expect(fields().every(({ disabled }) => disabled)).toBe(true);
    expect((fixture.nativeElement as HTMLElement).textContent).toContain('Treatment of \u2212999 (no bureau record)');
  });

  it('tells the whole entry with what was changed', () => {
    const told: DictionaryEntry[] = [];
    fixture.componentInstance.changed.subscribe((change) => told.push(change));
    fixture.componentRef.setInput('editable', true);
    fixture.detectChanges();
    type(fields()[0], ' Utilisation of cards ');
    type(fields()[4], 'worst points');
    type(fields()[3], '');
    expect(told).toEqual([
      { ...entry, label: 'Utilisation of cards' },
      { ...entry, treatments: [...entry.treatments, { code: '-998', treatment: 'worst points' }] },
      { ...entry, treatments: [] },
    ]);
  });
});
