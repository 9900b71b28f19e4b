import { smallScorecard } from '../testing/scorecard';
import { categoriesOf } from '../pages/applicant-form';
import { fillSettings, holdToBands, settingsForm, settingsOf, textKey } from './settings-form';

const { settings } = smallScorecard;

describe('the settings form', () => {
  it('gives back what it was filled with', () => {
    const form = settingsForm();
    fillSettings(form, settings, ['age', 'home']);
    expect(form.dirty).toBe(false);
    expect(settingsOf(form, settings)).toEqual(settings);
    const quantiles = { ...settings, bands: { quantiles: 8 }, cutOff: null };
    fillSettings(form, quantiles, ['age', 'home']);
    expect(settingsOf(form, quantiles)).toEqual(quantiles);
  });

  it('holds only the bands in use to be right', () => {
    const form = settingsForm();
    fillSettings(form, settings, ['age']);
    form.controls.edges.setValue('560 540');
    expect(settingsOf(form, settings)).toBeNull();
    form.controls.bandsBy.setValue('quantiles');
    holdToBands(form);
    expect(settingsOf(form, settings)?.bands).toEqual({ quantiles: 10 });
  });

  it('keeps texts of columns that are not kept, and drops what was emptied', () => {
    const form = settingsForm();
    fillSettings(form, settings, ['age']);
    form.controls.texts.controls[textKey('age')].setValue('  ');
    expect(settingsOf(form, settings)?.reasons.texts).toEqual({ home: 'Kind of home' });
  });

  it('has a text of its own for a column that is called as something every object has', () => {
    const form = settingsForm();
    fillSettings(form, settings, ['constructor', 'toString']);
    expect(settingsOf(form, settings)).toEqual(settings);
    form.controls.texts.controls[textKey('constructor')].setValue('Kind of building');
    expect(settingsOf(form, settings)?.reasons.texts).toEqual({ ...settings.reasons.texts, constructor: 'Kind of building' });
  });

  it('takes no scale out of bounds', () => {
    const form = settingsForm();
    fillSettings(form, settings, []);
    form.controls.pointsToDouble.setValue(0);
    expect(settingsOf(form, settings)).toBeNull();
  });
});

describe('categories to suggest', () => {
  it('come from the labels of the bins, without the missing bin', () => {
    expect(categoriesOf(['owner, parents', 'rent', 'missing'])).toEqual(['owner', 'parents', 'rent']);
  });
});
