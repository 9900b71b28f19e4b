import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatSelectHarness } from '@angular/material/select/testing';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DraftOutcomeRule } from '@tallystone/contracts/samples/definition';
import { OutcomeRuleEditor } from './outcome-rule-editor';

const profile = (column: string, change: Partial<ColumnProfile> = {}): ColumnProfile =>
  ({ column, kind: 'numeric', hashed: false, numeric: { smallest: 0, largest: 180 }, date: null, ...change }) as ColumnProfile;
const days = profile('days_past_due');
const rule: DraftOutcomeRule = {
  bad: 90,
  indeterminate: 30,
  missing: 'excluded',
  monthsOnBook: { column: 'months_on_book', least: 12 },
};

describe('the outcome by rule', () => {
  let fixture: ComponentFixture<OutcomeRuleEditor>;
  let told: DraftOutcomeRule[];
  const element = (): HTMLElement => fixture.nativeElement as HTMLElement;
  const field = (label: string): HTMLInputElement =>
    [...element().querySelectorAll('mat-form-field')]
      .find((one) => one.querySelector('mat-label')?.textContent?.includes(label))!
      .querySelector('input')!;
  const type = (label: string, text: string): void => {
    field(label).value = text;
    field(label).dispatchEvent(new Event('change'));
  };
  const rows = (): string[] =>
    [...element().querySelectorAll('tbody tr')].map((row) => [...row.children].map((cell) => cell.textContent?.trim()).join(' | '));
  const select = (place: number): Promise<MatSelectHarness> =>
    TestbedHarnessEnvironment.loader(fixture)
      .getAllHarnesses(MatSelectHarness)
      .then((all) => all[place]);

  beforeEach(() => {
    fixture = TestBed.createComponent(OutcomeRuleEditor);
    told = [];
    fixture.componentInstance.changed.subscribe((change) => told.push(change));
    fixture.componentRef.setInput('rule', rule);
    fixture.componentRef.setInput('days', days);
    fixture.componentRef.setInput('profiles', [
      days,
      profile('months_on_book'),
      profile('account', { hashed: true }),
      profile('channel', { kind: 'categorical' }),
    ]);
  });

  it('says what each part takes, in the order it is asked, and the bad rate that comes of it', () => {
    const counts = { tooFewMonths: 1200, missing: 0, bads: 310, indeterminates: 95, goods: 2790, badRate: 0.1 };
    fixture.componentRef.setInput('counts', counts);
    fixture.detectChanges();
    expect(rows()).toEqual([
      'Excluded | months_on_book below 12 | 1\u202f200',
      'Excluded | missing | 0',
      'Bad | days_past_due of 90 or more | 310',
      'Indeterminate | days_past_due from 30 to below 90 | 95',
      'Good | days_past_due below 30 | 2\u202f790',
    ]);
    expect(element().textContent).toContain('Bad rate 10.0\u202f% of the goods and bads');
    expect(element().textContent).toContain('days_past_due runs from 0 to 180');
    expect([...element().querySelectorAll('input')].every(({ disabled }) => disabled)).toBe(true);
  });

  it('says that nothing is counted yet, rather than the counts of another rule', () => {
    fixture.detectChanges();
    expect(element().querySelector('.gives')?.getAttribute('aria-busy')).toBe('true');
    expect(element().textContent).toContain('Counted once the change is saved');
    expect(rows()[2]).toBe('Bad | days_past_due of 90 or more | \u2013');
  });

  it('tells the whole rule with what was changed', async () => {
    fixture.componentRef.setInput('editable', true);
    fixture.detectChanges();
    type('Bad from', '60');
    type('Indeterminate from', '');
    type('Excluded below', '6');
    await (await select(0)).clickOptions({ text: 'no such rule' });
    await (await select(1)).clickOptions({ text: 'to be settled first' });
    expect(told).toEqual([
      { ...rule, bad: 60 },
      { ...rule, indeterminate: null },
      { ...rule, monthsOnBook: { column: 'months_on_book', least: 6 } },
      { ...rule, monthsOnBook: null },
      { ...rule, missing: 'refuse' },
    ]);
  });

  it('offers numeric columns for months on book, but neither identifiers nor the days themselves', async () => {
    fixture.componentRef.setInput('editable', true);
    fixture.detectChanges();
    const months = await select(0);
    await months.open();
    expect(await Promise.all((await months.getOptions()).map((option) => option.getText()))).toEqual(['no such rule', 'months_on_book']);
  });

  it('puts back what cannot be, and tells nothing', () => {
    fixture.componentRef.setInput('editable', true);
    fixture.detectChanges();
    for (const [label, wrong, right] of [
      ['Bad from', '0', '90'],
      ['Bad from', '', '90'],
      ['Indeterminate from', '-1', '30'],
      ['Excluded below', '0', '12'],
    ] as const) {
      type(label, wrong);
      expect(field(label).value).toBe(right);
    }
    expect(told).toEqual([]);
  });
});
