import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatCheckboxModule } from '@angular/material/checkbox';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatSelectModule } from '@angular/material/select';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DraftContent, DraftOutcome } from '@tallystone/contracts/samples/definition';
import { count } from '../../../ui/numbers';
import { type MappedValue, type Meaning, ValueMapping } from './value-mapping';

const meanings: readonly Meaning[] = [
  { key: 'good', label: 'Good' },
  { key: 'bad', label: 'Bad' },
  { key: 'indeterminate', label: 'Indeterminate' },
  { key: 'excluded', label: 'Excluded' },
];

/** Which column says how the loan went, what its values mean, and who was declined and has no outcome. */
@Component({
  selector: 'ts-outcome-editor',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatCheckboxModule, MatFormFieldModule, MatSelectModule, ValueMapping],
  template: `
    <mat-form-field class="pick">
      <mat-label>Outcome column</mat-label>
      <mat-select [value]="column()?.column ?? null" [disabled]="!editable()" (selectionChange)="columnChosen.emit($event.value)">
        @for (profile of candidates(); track profile.column) {
          <mat-option [value]="profile.column">{{ profile.column }}</mat-option>
        }
      </mat-select>
    </mat-form-field>
    @if (column(); as profile) {
      <ts-value-mapping
        label="What each outcome means"
        [values]="values()"
        [meanings]="meanings"
        [rows]="profile.rows"
        [editable]="editable()"
        (mapped)="map($event)"
      />
    }
    @if (decision(); as profile) {
      <fieldset>
        <legend>Declined, by {{ profile.column }}</legend>
        <p class="ts-caption">
          These applicants have no outcome: they are counted, and take no part in the fit. Conclusions hold for accepts only.
        </p>
        @for (value of profile.mostFrequent; track value.value) {
          <mat-checkbox
            [checked]="isDeclined(value.value)"
            [disabled]="!editable()"
            (change)="decline(value.value, $event.checked)"
          >
            {{ value.value }} <span class="ts-second">({{ count(value.count) }})</span>
          </mat-checkbox>
        }
      </fieldset>
    }
  `,
  styles: `
    :host,
    fieldset {
      display: grid;
      gap: 12px;
      grid-template-columns: minmax(0, 1fr);
    }
    .pick {
      max-width: 320px;
    }
    fieldset {
      gap: 2px;
    }
  `,
})
export class OutcomeEditor {
  readonly content = input.required<DraftContent>();
  readonly profiles = input.required<readonly ColumnProfile[]>();
  readonly column = input<ColumnProfile | null>(null);
  readonly decision = input<ColumnProfile | null>(null);
  readonly editable = input(false);
  readonly columnChosen = output<string>();
  readonly outcome = output<DraftOutcome>();
  readonly declined = output<DraftContent['declined']>();
  protected readonly meanings = meanings;
  protected readonly count = count;

  /** An outcome has a few values. */
  protected readonly candidates = computed(() =>
    this.profiles().filter(({ valuesComplete, distinct }) => valuesComplete && distinct > 0),
  );
  protected readonly values = computed<MappedValue[]>(() => {
    const profile = this.column();
    if (!profile) return [];
    const { outcome } = this.content();
    const meaningOf = (value: string): string | null =>
      meanings.map(({ key }) => key as keyof DraftOutcome).find((key) => outcome[key].includes(value)) ?? null;
    return [...profile.mostFrequent, ...profile.missingTokens].map(({ value, count: rows }) => ({
      value,
      count: rows,
      meaning: meaningOf(value),
    }));
  });

  protected map({ value, meaning }: { value: string; meaning: string }): void {
    const { outcome } = this.content();
    const without = (list: readonly string[]): string[] => list.filter((entry) => entry !== value);
    const next: DraftOutcome = {
      good: without(outcome.good),
      bad: without(outcome.bad),
      indeterminate: without(outcome.indeterminate),
      excluded: without(outcome.excluded),
    };
    next[meaning as keyof DraftOutcome].push(value);
    this.outcome.emit(next);
  }

  protected isDeclined(value: string): boolean {
    return this.content().declined?.values.includes(value) ?? false;
  }

  protected decline(value: string, on: boolean): void {
    const values = (this.content().declined?.values ?? []).filter((entry) => entry !== value);
    if (on) values.push(value);
    this.declined.emit(values.length > 0 ? { values } : null);
  }
}
