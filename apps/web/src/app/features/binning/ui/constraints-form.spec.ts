import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { TestBed } from '@angular/core/testing';
import { MatFormFieldHarness } from '@angular/material/form-field/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { MatSelectHarness } from '@angular/material/select/testing';
import { ConstraintsFields, constraintsForm, constraintsOf, trendChoices, usualConstraints } from './constraints-form';

describe('constraints of automatic classing', () => {
  it('are told as they were asked for, the share typed in per cent', () => {
    const form = constraintsForm();
    expect(form.value.smallestShare).toBe(5);
    expect(constraintsOf(form)).toEqual(usualConstraints);
    for (const smallestShare of [0, 0.07, 0.075, 0.29, 0.5])
      expect(constraintsOf(constraintsForm({ ...usualConstraints, smallestShare })).smallestShare).toBeCloseTo(smallestShare, 12);
    form.patchValue({ smallestShare: 7.5, mostBins: 4, trend: 'falling' });
    expect(constraintsOf(form)).toEqual({ ...usualConstraints, smallestShare: 0.075, mostBins: 4, trend: 'falling' });
  });

  it('name the criterion only where it is not the usual one', () => {
    const form = constraintsForm({ ...usualConstraints, criterion: 'deviance' });
    expect(constraintsOf(form).criterion).toBe('deviance');
    form.patchValue({ criterion: 'information value' });
    expect(constraintsOf(form)).not.toHaveProperty('criterion');
  });

  it('ask for cross-validation again where it had chosen the trend', () => {
    const chosen = { ...usualConstraints, trend: 'rising', trendBy: 'cross-validation' } as const;
    expect(constraintsOf(constraintsForm(chosen)).trend).toBe('cross-validated');
    expect(constraintsOf(constraintsForm({ ...usualConstraints, trend: 'rising' })).trend).toBe('rising');
  });

  it('have limits', () => {
    for (const [field, low, high] of [
      ['smallestShare', 0, 50],
      ['mostBins', 1, 50],
      ['smallestDifference', 0, 5],
      ['fineClasses', 2, 200],
    ] as const) {
      const valid = (value: number | null): boolean => {
        const form = constraintsForm();
        form.controls[field].setValue(value as number);
        return form.valid;
      };
      expect([valid(low), valid(high)]).toEqual([true, true]);
      expect([valid(low - 1), valid(high + 1), valid(null)]).toEqual([false, false, false]);
    }
    for (const field of ['smallestGoods', 'smallestBads'] as const) {
      const form = constraintsForm();
      form.controls[field].setValue(-1);
      expect(form.valid).toBe(false);
      form.controls[field].setValue(0);
      expect(form.valid).toBe(true);
    }
  });
});

describe('the fields for constraints', () => {
  const setUp = async (withFineClasses = true) => {
    const fixture = TestBed.createComponent(ConstraintsFields);
    const form = constraintsForm();
    fixture.componentRef.setInput('form', form);
    fixture.componentRef.setInput('withFineClasses', withFineClasses);
    await fixture.whenStable();
    return { form, loader: TestbedHarnessEnvironment.loader(fixture) };
  };

  it('stand for each constraint, fine classes only where they can be chosen', async () => {
    const labels = async (withFineClasses: boolean): Promise<(string | null)[]> => {
      const { loader } = await setUp(withFineClasses);
      return Promise.all((await loader.getAllHarnesses(MatFormFieldHarness)).map((field) => field.getLabel()));
    };
    const others = [
      'Smallest share of a bin',
      'Most bins',
      'Fewest goods in a bin',
      'Fewest bads in a bin',
      'Smallest difference of WOE',
    ];
    const choices = ['Trend of numeric characteristics', 'Best is'];
    expect(await labels(true)).toEqual([...others, 'Fine classes', ...choices]);
    expect(await labels(false)).toEqual([...others, ...choices]);
  });

  it('change the form, and say what is wrong with it', async () => {
    const { form, loader } = await setUp();
    const share = await loader.getHarness(MatInputHarness.with({ selector: '[formControlName=smallestShare]' }));
    await share.setValue('60');
    await share.blur();
    const field = await loader.getHarness(MatFormFieldHarness.with({ floatingLabelText: 'Smallest share of a bin' }));
    expect(await field.getTextErrors()).toEqual(['Between 0 and 50 %']);
    await share.setValue('2.5');
    expect(await field.getTextErrors()).toEqual([]);
    const [trend, best] = await loader.getAllHarnesses(MatSelectHarness);
    await trend.open();
    expect(await Promise.all((await trend.getOptions()).map((option) => option.getText()))).toEqual(
      trendChoices.map(({ label }) => label),
    );
    await trend.clickOptions({ text: /^One valley/ });
    await best.clickOptions({ text: 'The smallest deviance' });
    expect(constraintsOf(form)).toEqual({
      ...usualConstraints,
      smallestShare: 0.025,
      trend: 'one-valley',
      criterion: 'deviance',
    });
  });
});
