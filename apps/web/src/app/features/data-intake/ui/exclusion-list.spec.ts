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

  describe('that list values', () => {
    const quote = {
      column: 'quote',
      kind: 'numeric',
      hashed: false,
      valuesComplete: true,
      mostFrequent: ['1,5', '2,0', '3', '3,0', '7'].map((value) => ({ value, count: 10 })),
      missingTokens: [{ value: 'NA', count: 3 }],
    } as unknown as ColumnProfile;
    const listed = (values: string[], change: Partial<ColumnProfile> = {}): void => {
      fixture.componentRef.setInput('columns', [{ ...quote, ...change }]);
      fixture.componentRef.setInput('signs', { decimal: ',', thousands: null });
      fixture.componentRef.setInput('rules', [{ ...rule, tests: [{ column: 'quote', in: values }] }]);
      fixture.detectChanges();
    };
    const taken = (typed: string): string[] | undefined => {
      told.length = 0;
      type(typed);
      return told.at(0)?.[0].tests[0].in;
    };
    const unheld = (): string | null => page().querySelector('[role=status]')?.textContent ?? null;

    it('take a typed number to the texts that the column has for it, and a comma to be its decimal sign', () => {
      listed(['7']);
      expect(taken('1,5')).toEqual(['1,5']);
      expect(taken('1.5')).toEqual(['1,5']);
      expect(taken('2, 1,5')).toEqual(['2,0', '1,5']);
      expect(taken('1,5; 2')).toEqual(['1,5', '2,0']);
      expect(taken('"1,5"')).toEqual(['1,5']);
      expect(taken('3')).toEqual(['3', '3,0']);
      // The column has both numbers and not the one that they would make.
      expect(taken('3,7')).toEqual(['3', '3,0', '7']);
      expect(taken('9.25')).toEqual(['9,25']);
      expect(taken('NTC, 7')).toEqual(['NTC', '7']);
    });

    it('are refused where nobody can tell which numbers are meant', () => {
      listed(['7']);
      expect(taken('1,5,2,5')).toBeUndefined();
      expect(page().querySelector('[role=alert]')?.textContent).toContain(
        'Leave a blank behind each comma that parts two values',
      );
    });

    it('are told where no row holds them, unless the column has more values than are listed', () => {
      listed(['1,5', '7']);
      expect(unheld()).toBeNull();
      listed(['1', '5', '7']);
      expect(unheld()).toBe('No row holds 1, 5: values are compared as they are written in the file.');
      listed(['NA', '7']);
      expect(unheld()).toBe('NA is a missing value, which “is missing” alone takes.');
      listed(['1', '5', '7'], { valuesComplete: false });
      expect(unheld()).toBeNull();
    });

    it('take a comma between thousands along', () => {
      listed(['7'], { mostFrequent: ['1,500', '2', '900'].map((value) => ({ value, count: 1 })) });
      fixture.componentRef.setInput('signs', { decimal: '.', thousands: ',' });
      fixture.detectChanges();
      expect(taken('1,500, 900')).toEqual(['1,500', '900']);
      expect(taken('1500')).toEqual(['1,500']);
      expect(taken('2,900')).toEqual(['2', '900']);
    });
  });
});
