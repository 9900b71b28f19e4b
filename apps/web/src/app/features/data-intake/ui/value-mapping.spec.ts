import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { ValueMapping } from './value-mapping';

describe('the meaning of a value', () => {
  let fixture: ComponentFixture<ValueMapping>;
  const told: { value: string; meaning: string | null }[] = [];
  const press = (label: string): void => {
    const buttons = [...(fixture.nativeElement as HTMLElement).querySelectorAll<HTMLButtonElement>('mat-button-toggle button')];
    buttons.find(({ textContent }) => textContent.trim() === label)?.click();
  };
  const show = (meaning: string | null): void => {
    fixture.componentRef.setInput('values', [{ value: 'paid', count: 10, meaning }]);
    fixture.detectChanges();
  };

  const later = (): Promise<void> => new Promise((resolve) => setTimeout(resolve));

  beforeEach(() => {
    told.length = 0;
    fixture = TestBed.createComponent(ValueMapping);
    fixture.componentRef.setInput('label', 'What each outcome means');
    fixture.componentRef.setInput('meanings', [
      { key: 'good', label: 'Good' },
      { key: 'bad', label: 'Bad' },
    ]);
    fixture.componentRef.setInput('editable', true);
    fixture.componentInstance.mapped.subscribe((change) => told.push(change));
    show(null);
  });

  it('is given by an arrow key too', () => {
    show('good');
    const [first] = [...(fixture.nativeElement as HTMLElement).querySelectorAll<HTMLElement>('mat-button-toggle button')];
    first.dispatchEvent(new KeyboardEvent('keydown', { key: 'ArrowRight', keyCode: 39, bubbles: true }));
    expect(told).toEqual([{ value: 'paid', meaning: 'bad' }]);
  });

  it('is given by pressing, changed by pressing another, and taken back by pressing it again', async () => {
    press('Good');
    await later();
    show('good');
    press('Bad');
    await later();
    show('bad');
    press('Bad');
    show(null);
    expect(told.map(({ meaning }) => meaning)).toEqual(['good', 'bad', null]);
    expect((fixture.nativeElement as HTMLElement).querySelectorAll('.mat-button-toggle-checked')).toHaveLength(0);
    press('Bad');
    expect(told.at(-1)).toEqual({ value: 'paid', meaning: 'bad' });
  });

  it('stays where nobody may change it', () => {
    fixture.componentRef.setInput('editable', false);
    show('good');
    press('Good');
    expect(told).toEqual([]);
  });

  it('can be taken from a value that the column does not have, which is said', async () => {
    const shown = (): string => (fixture.nativeElement as HTMLElement).textContent.replace(/\s+/g, ' ');
    show('good');
    expect(shown()).not.toContain('not in this file');
    fixture.componentRef.setInput('values', [{ value: 'open', count: null, meaning: 'good' }]);
    fixture.detectChanges();
    expect(shown()).toContain('opennot in this file');
    press('Good');
    await later();
    expect(told).toEqual([{ value: 'open', meaning: null }]);
    fixture.componentRef.setInput('complete', false);
    fixture.detectChanges();
    expect(shown()).toContain('opennot among those listed');
  });
});
