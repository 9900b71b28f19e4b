import { type ComponentFixture, TestBed } from '@angular/core/testing';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { ExclusionRule } from '@tallystone/contracts/samples/definition';
import { ExclusionList } from './exclusion-list';

describe('exclusions', () => {
  let fixture: ComponentFixture<ExclusionList>;
  const told: ExclusionRule[][] = [];
  const rule: ExclusionRule = { reason: 'too young', combine: 'all', tests: [{ column: 'age', below: 18 }] };
  const page = (): HTMLElement => fixture.nativeElement as HTMLElement;
  const value = (): HTMLInputElement => [...page().querySelectorAll<HTMLInputElement>('.test input')][0];
  const type = (typed: string): void => {
    value().value = typed;
    value().dispatchEvent(new Event('change'));
    fixture.detectChanges();
  };

  beforeEach(() => {
    told.length = 0;
    fixture = TestBed.createComponent(ExclusionList);
    fixture.componentRef.setInput('columns', [{ column: 'age', kind: 'numeric', hashed: false } as ColumnProfile]);
    fixture.componentRef.setInput('rules', [rule]);
    fixture.componentRef.setInput('editable', true);
    fixture.componentInstance.changed.subscribe((rules) => told.push(rules));
    fixture.detectChanges();
  });

  it('keep their limit while what is typed is no number, and say so beside it', () => {
    type('1 000');
    expect(told).toEqual([]);
    expect(value().value).toBe('1 000');
    expect(value().getAttribute('aria-invalid')).toBe('true');
    expect(page().querySelector('[role=alert]')?.textContent).toBe(
      'Type a number without thousands signs, such as 1000 or 1234.5. Until then the test stays as it was: age is below 18.',
    );
    type('1000');
    expect(told).toEqual([[{ ...rule, tests: [{ column: 'age', below: 1000 }] }]]);
    expect(page().querySelector('[role=alert]')).toBeNull();
  });
});
