import { type ComponentFixture, TestBed } from '@angular/core/testing';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DraftContent } from '@tallystone/contracts/samples/definition';
import { OutcomeEditor } from './outcome-editor';

const profile = (column: string, change: Partial<ColumnProfile> = {}): ColumnProfile => ({
  position: 0,
  column,
  kind: 'categorical',
  rows: 100,
  distinct: 2,
  missing: 0,
  missingTokens: [],
  specialSuspects: [],
  mostFrequent: [
    { value: '0', count: 80 },
    { value: '1', count: 20 },
  ],
  valuesComplete: true,
  numeric: null,
  date: null,
  text: null,
  flags: [],
  suggestedRole: 'characteristic',
  suggestedProtected: false,
  suggestion: 'Nothing speaks against it.',
  hashed: false,
  ...change,
});

describe('the outcome under edit', () => {
  let fixture: ComponentFixture<OutcomeEditor>;
  const content: DraftContent = {
    columns: [],
    outcome: { good: ['0'], bad: ['1', 'late'], indeterminate: [], excluded: [] },
    declined: { values: ['refused'] },
    exclusions: [],
    partition: { by: 'seed', seed: 1, holdOutShare: 0.3, outOfTime: null },
  };
  const page = (): HTMLElement => fixture.nativeElement as HTMLElement;
  const shown = (): string => page().textContent.replace(/\s+/g, ' ');
  function show(profiles: readonly ColumnProfile[], change: Partial<DraftContent> = {}): void {
    fixture = TestBed.createComponent(OutcomeEditor);
    fixture.componentRef.setInput('content', { ...content, ...change });
    fixture.componentRef.setInput('profiles', profiles);
    fixture.componentRef.setInput('editable', true);
    fixture.componentRef.setInput('column', profiles.find(({ column }) => column === 'bad') ?? null);
    fixture.componentRef.setInput('decision', profiles.find(({ column }) => column === 'decision') ?? null);
    fixture.detectChanges();
  }

  it('lists what something is said of though the file does not have it, and lets it be taken out', async () => {
    show([profile('bad'), profile('decision', { missing: 3, missingTokens: [{ value: '', count: 3 }] })]);
    expect(shown()).toContain('latenot in this file');
    const boxes = [...page().querySelectorAll('mat-checkbox')];
    expect(boxes.map(({ textContent }) => textContent.replace(/\s+/g, ' ').trim())).toEqual([
      '0 (80)',
      '1 (20)',
      'empty (3)',
      'refused (not in this file)',
    ]);
    const told: unknown[] = [];
    fixture.componentInstance.declined.subscribe((value) => told.push(value));
    fixture.componentInstance.outcome.subscribe((value) => told.push(value));
    boxes[3].querySelector('input')?.click();
    const late = page().querySelector('[aria-label="late means"]');
    [...(late?.querySelectorAll('button') ?? [])].find(({ textContent }) => textContent.trim() === 'Bad')?.click();
    await new Promise((resolve) => setTimeout(resolve));
    expect(told).toEqual([null, { ...content.outcome, bad: ['1'] }]);
  });

  it('says of declined applicants that whether they are inferred is chosen with each fit', () => {
    show([profile('bad'), profile('decision')]);
    expect(shown()).toContain(
      'Whether a fit infers one for them is chosen with each fit, and the fit on accepts only always stands beside it.',
    );
    expect(shown()).not.toContain('take no part in the fit');
  });

  it('says why no column can be the outcome, and what to do', () => {
    const many = { valuesComplete: false, distinct: 90 };
    const offers = (): string => (shown().match(/(The file has one column|No column can).*?(?= Declined|$)/) ?? [''])[0];
    show([profile('age,limit,bad', many)]);
    expect(offers()).toMatch(/^The file has one column as it was read.*read it again with that one/);
    show([profile('age', many), profile('limit', many)]);
    expect(offers()).toMatch(/^No column can be the outcome by its values: each has more than 50.*State the outcome by rule/);
    const rule = { bad: 90, indeterminate: 30, missing: 'refuse', monthsOnBook: null } as const;
    show([profile('age', many), profile('limit', many)], { outcome: { ...content.outcome, rule } });
    expect(offers()).toMatch(/^No column can have the days past due/);
    show([profile('bad'), profile('age', many)]);
    expect(offers()).toBe('');
  });
});
