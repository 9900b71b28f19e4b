import type { HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatFormFieldHarness } from '@angular/material/form-field/testing';
import { MatSelectHarness } from '@angular/material/select/testing';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { ReadingForm } from './reading-form';

describe('the reading choices', () => {
  let fixture: ComponentFixture<ReadingForm>;
  let loader: HarnessLoader;
  const told: Partial<ReadingChoices>[] = [];
  const choices: ReadingChoices = {
    delimiter: ';',
    encoding: 'utf-8',
    decimal: ',',
    thousands: '.',
    trim: true,
    missing: ['', 'NA'],
  };
  const field = (label: string): Promise<MatFormFieldHarness> =>
    loader.getHarness(MatFormFieldHarness.with({ floatingLabelText: label }));
  const select = async (label: string): Promise<MatSelectHarness> => {
    const found = await (await field(label)).getControl(MatSelectHarness);
    if (!found) throw new Error(`${label} offers nothing`);
    return found;
  };

  beforeEach(() => {
    told.length = 0;
    fixture = TestBed.createComponent(ReadingForm);
    loader = TestbedHarnessEnvironment.loader(fixture);
    fixture.componentRef.setInput('choices', choices);
    fixture.componentInstance.changed.subscribe((change) => told.push(change));
  });

  it('ask for the date order where none is chosen, with what speaks for and against', async () => {
    const reason = '03/04/2024 in line 2 (applied) can be day first or month first, and no value looked at tells which.';
    fixture.componentRef.setInput('reasons', [{ choice: 'dateOrder', reason }]);
    const order = await select('Date order');
    expect(await order.isEmpty()).toBe(true);
    expect(await (await field('Date order')).getTextHints()).toEqual([reason]);
    await order.open();
    const options = await order.getOptions();
    expect(await Promise.all(options.map((option) => option.getText()))).toEqual([
      'Year, month, day only (2024-04-03)',
      'Day first (03/04/2024 is 3 April)',
      'Month first (04/03/2024 is 3 April)',
    ]);
    await options[1].click();
    expect(told).toEqual([{ dateOrder: 'day-month-year' }]);
  });

  it('show the order that was proposed or chosen', async () => {
    fixture.componentRef.setInput('choices', { ...choices, dateOrder: 'month-day-year' });
    expect(await (await select('Date order')).getValueText()).toBe('Month first (04/03/2024 is 3 April)');
    fixture.componentRef.setInput('disabled', true);
    expect(await (await select('Date order')).isDisabled()).toBe(true);
  });

  it('ask what becomes of a time only where there is one', async () => {
    expect(await loader.getHarnessOrNull(MatFormFieldHarness.with({ floatingLabelText: 'Dates with a time' }))).toBeNull();
    fixture.componentRef.setInput('choices', { ...choices, dateTimes: 'day' });
    const times = await select('Dates with a time');
    expect(await times.getValueText()).toContain('Their day');
    await times.open();
    await times.clickOptions({ text: 'Text, as they stand' });
    expect(told).toEqual([{ dateTimes: 'text' }]);
  });

  it('show the other choices, and tell what is changed of them alone', async () => {
    expect(await (await select('Delimiter')).getValueText()).toBe('Semicolon ;');
    const thousands = await select('Thousands sign');
    await thousands.open();
    await thousands.clickOptions({ text: 'None' });
    const missing = (fixture.nativeElement as HTMLElement).querySelector<HTMLInputElement>('input[placeholder]');
    expect(missing?.value).toBe('NA');
    if (missing) missing.value = ' NULL, ., NULL,, ';
    missing?.dispatchEvent(new Event('change'));
    expect(told).toEqual([{ thousands: null }, { missing: ['', 'NULL', '.'] }]);
  });

  it('keep a token of blanks and one with a comma, and take nothing while a quote is open', () => {
    fixture.componentRef.setInput('choices', { ...choices, missing: ['', ' ', 'n.a., none'] });
    fixture.detectChanges();
    const missing = (fixture.nativeElement as HTMLElement).querySelector<HTMLInputElement>('input[placeholder]')!;
    expect(missing.value).toBe('" ", "n.a., none"');
    for (const typed of ['" ", "n.a., none", NA', '" ", "n.a.']) {
      missing.value = typed;
      missing.dispatchEvent(new Event('change'));
    }
    expect(told).toEqual([{ missing: ['', ' ', 'n.a., none', 'NA'] }]);
    fixture.detectChanges();
    expect((fixture.nativeElement as HTMLElement).textContent).toContain('A quote is not closed, so nothing was changed.');
  });
});
