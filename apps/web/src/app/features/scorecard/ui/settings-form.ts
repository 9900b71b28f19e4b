import { type AbstractControl, FormControl, FormGroup, FormRecord, type ValidationErrors, Validators } from '@angular/forms';
import { reasonTextOf } from '@tallystone/contracts/scorecards/reason-text';
import type { ScorecardSettings } from '@tallystone/contracts/scorecards/schema';
import { readEdges } from './scorecard-view';

const number = (low: number, high: number) =>
  new FormControl<number | null>(null, { validators: [Validators.required, Validators.min(low), Validators.max(high)] });

const rising = ({ value }: AbstractControl): ValidationErrors | null => (readEdges(value as string) === null ? { edges: true } : null);

/** The key of a column's text among the controls: a group takes "constructor" for a control that it has, so no key is a bare name of a column. */
export const textKey = (column: string): string => `text of ${column}`;

/** The settings of a scorecard as a form; `settingsOf` reads it back. */
export function settingsForm() {
  return new FormGroup({
    pointsToDouble: number(1, 1000),
    baseScore: number(-10000, 10000),
    baseOdds: number(0.001, 1_000_000),
    intercept: new FormControl<'spread' | 'base'>('spread', { nonNullable: true }),
    bandsBy: new FormControl<'quantiles' | 'edges'>('quantiles', { nonNullable: true }),
    quantiles: number(2, 50),
    edges: new FormControl('', { nonNullable: true, validators: [rising] }),
    cutOff: new FormControl<number | null>(null),
    baseline: new FormControl<'mean' | 'cut-off' | 'largest'>('mean', { nonNullable: true }),
    most: number(1, 10),
    texts: new FormRecord<FormControl<string>>({}),
  });
}
export type SettingsForm = ReturnType<typeof settingsForm>;

/** Only what is used of the bands is held to be right. */
export function holdToBands(form: SettingsForm): void {
  const byEdges = form.controls.bandsBy.value === 'edges';
  const [on, off] = byEdges ? [form.controls.edges, form.controls.quantiles] : [form.controls.quantiles, form.controls.edges];
  on.enable({ emitEvent: false });
  off.disable({ emitEvent: false });
}

export function fillSettings(form: SettingsForm, settings: ScorecardSettings, columns: readonly string[]): void {
  const { scaling, bands, reasons, cutOff } = settings;
  const { texts } = form.controls;
  // Names of columns may hold dots, which a path of controls would take apart: the group is keyed, never addressed by path.
  const keys = new Set(columns.map(textKey));
  for (const key of Object.keys(texts.controls)) if (!keys.has(key)) texts.removeControl(key, { emitEvent: false });
  for (const key of keys) {
    if (!(key in texts.controls)) {
      texts.addControl(key, new FormControl('', { nonNullable: true, validators: [Validators.maxLength(500)] }), { emitEvent: false });
    }
  }
  form.patchValue({
    pointsToDouble: scaling.pointsToDouble,
    baseScore: scaling.baseScore,
    baseOdds: scaling.baseOdds,
    intercept: scaling.intercept,
    bandsBy: Array.isArray(bands) ? 'edges' : 'quantiles',
    quantiles: Array.isArray(bands) ? 10 : bands.quantiles,
    edges: Array.isArray(bands) ? bands.join(' ') : '',
    cutOff,
    baseline: reasons.baseline,
    most: reasons.most,
    texts: Object.fromEntries(columns.map((column) => [textKey(column), reasonTextOf(reasons.texts, column)])),
  });
  holdToBands(form);
  form.markAsPristine();
}

/** What the form says, or null while something in it is not right. Texts of columns that are not kept at this penalty stay as they were. */
export function settingsOf(form: SettingsForm, before: ScorecardSettings): ScorecardSettings | null {
  if (form.invalid) return null;
  const value = form.getRawValue();
  const edges = readEdges(value.edges);
  const { pointsToDouble, baseScore, baseOdds, quantiles, most } = value;
  if (pointsToDouble === null || baseScore === null || baseOdds === null || most === null) return null;
  if (value.bandsBy === 'edges' ? edges === null : quantiles === null) return null;
  const texts = { ...before.reasons.texts };
  for (const [key, text] of Object.entries(value.texts)) {
    const column = key.slice(textKey('').length);
    if (text.trim()) texts[column] = text.trim();
    else delete texts[column];
  }
  return {
    scaling: { pointsToDouble, baseScore, baseOdds, intercept: value.intercept, rounding: 'nearest' },
    bands: value.bandsBy === 'edges' ? (edges ?? []) : { quantiles: quantiles ?? 10 },
    reasons: { baseline: value.baseline, most, texts },
    cutOff: value.cutOff,
  };
}
