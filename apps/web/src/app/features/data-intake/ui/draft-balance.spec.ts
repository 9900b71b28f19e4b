import { type ComponentFixture, TestBed } from '@angular/core/testing';
import type { DraftBalance as Compared } from '@tallystone/contracts/samples/balance';
import { describe, expect, it } from 'vitest';
import { DraftBalance } from './draft-balance';

const reading = { rows: 1000, index: 0.011, classes: 10, smoothed: false, criticalValue: 0.02, pValue: 0.5, largest: { label: 'rent', development: 0.31, compared: 0.24 } };
const compared: Compared = {
  last: { revision: 4, current: true, characteristics: [{ column: 'home', holdOut: reading, outOfTime: null }] },
  compared: [{ partition: 'seed 7, 30 % hold-out', largest: 0.011, comparedAt: '2026-11-03T09:00:00.000Z', comparedBy: 'marian' }],
};

function shown(inputs: Record<string, unknown>): ComponentFixture<DraftBalance> {
  const fixture = TestBed.createComponent(DraftBalance);
  for (const [name, value] of Object.entries({ compared, revision: 4, editable: true, ready: true, ...inputs })) fixture.componentRef.setInput(name, value);
  fixture.detectChanges();
  return fixture;
}
const text = (fixture: ComponentFixture<DraftBalance>): string => (fixture.nativeElement as HTMLElement).textContent.replace(/\s+/g, ' ');
const button = (fixture: ComponentFixture<DraftBalance>): HTMLButtonElement | undefined =>
  [...(fixture.nativeElement as HTMLElement).querySelectorAll('button')].find(({ textContent }) => /Compare/.test(textContent));

describe('the balance of a draft', () => {
  it('is asked for, once the draft is saved and counted', () => {
    const fixture = shown({ compared: { last: null, compared: [] }, ready: false });
    expect(button(fixture)?.textContent.trim()).toBe('Compare the partitions');
    expect(button(fixture)?.disabled).toBe(true);
    fixture.componentRef.setInput('ready', true);
    fixture.detectChanges();
    let asked = 0;
    fixture.componentInstance.asked.subscribe(() => asked++);
    button(fixture)?.click();
    expect(asked).toBe(1);
  });
  it('is shown while the draft is as it was compared, and offered again once it changed', () => {
    const fixture = shown({});
    expect(text(fixture)).toContain('the largest is 0.011 (home)');
    expect(button(fixture)).toBeUndefined();
    for (const revision of [null, 5]) {
      fixture.componentRef.setInput('revision', revision);
      fixture.detectChanges();
      expect(text(fixture)).toContain('The draft was changed since its partitions were compared.');
      expect(button(fixture)?.textContent.trim()).toBe('Compare them again');
      expect(text(fixture)).not.toContain('the largest is');
    }
  });
  it('keeps every partition that was compared in sight', () => {
    expect(text(shown({ revision: 9 }))).toMatch(/Compared so far: seed 7, 30 % hold-out: largest index 0\.011; marian, /);
  });
  it('offers nothing to those who only read', () => {
    expect(button(shown({ revision: 9, editable: false }))).toBeUndefined();
  });
});
