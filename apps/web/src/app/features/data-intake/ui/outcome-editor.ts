import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatCheckboxModule } from '@angular/material/checkbox';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatRadioModule } from '@angular/material/radio';
import { MatSelectModule } from '@angular/material/select';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DraftContent, DraftOutcome, DraftOutcomeRule, RuleCounts } from '@tallystone/contracts/samples/definition';
import { count } from '../../../ui/numbers';
import { mappedValues } from './mapped-values';
import { OutcomeRuleEditor } from './outcome-rule-editor';
import { type MappedValue, type Meaning, ValueMapping } from './value-mapping';

type Valued = Exclude<keyof DraftOutcome, 'rule'>;

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
  imports: [MatCheckboxModule, MatFormFieldModule, MatRadioModule, MatSelectModule, OutcomeRuleEditor, ValueMapping],
  template: `
    <mat-radio-group
      aria-label="How the outcome is stated"
      [value]="rule() === null ? 'values' : 'rule'"
      [disabled]="!editable()"
      (change)="chooseRule($event.value === 'rule')"
    >
      <mat-radio-button value="values">By the values of a column</mat-radio-button>
      <mat-radio-button value="rule">By rule: days past due, months on book</mat-radio-button>
    </mat-radio-group>
    <mat-form-field class="pick">
      <mat-label>{{ rule() === null ? 'Outcome column' : 'Column of the days past due' }}</mat-label>
      <mat-select [value]="column()?.column ?? null" [disabled]="!editable()" (selectionChange)="columnChosen.emit($event.value)">
        @for (profile of candidates(); track profile.column) {
          <mat-option [value]="profile.column">{{ profile.column }}</mat-option>
        }
      </mat-select>
    </mat-form-field>
    @if (noCandidates(); as words) {
      <p>{{ words }}</p>
    }
    @if (rule(); as rule) {
      <ts-outcome-rule-editor
        [rule]="rule"
        [days]="column()"
        [profiles]="profiles()"
        [counts]="ruleCounts()"
        [editable]="editable()"
        (changed)="setRule($event)"
      />
    } @else if (column(); as profile) {
      <ts-value-mapping
        label="What each outcome means"
        [values]="values()"
        [meanings]="meanings"
        [rows]="profile.rows"
        [complete]="profile.valuesComplete"
        [editable]="editable()"
        (mapped)="map($event)"
      />
    }
    @if (decision(); as profile) {
      <fieldset>
        <legend>Declined, by {{ profile.column }}</legend>
        <p class="ts-caption">
          These applicants have no outcome: they are counted. Whether a fit infers one for them is chosen with each fit, and the
          fit on accepts only always stands beside it.
        </p>
        @for (entry of decisions(); track entry.value) {
          <mat-checkbox
            [checked]="entry.meaning !== null"
            [disabled]="!editable()"
            (change)="decline(entry.value, $event.checked)"
          >
            {{ entry.value === '' ? 'empty' : entry.value }}
            <span class="ts-second">({{ entry.count === null ? absent(profile) : count(entry.count) }})</span>
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
    mat-radio-group {
      display: grid;
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
  /** What the rule gives on the rows; null while it is not counted. */
  readonly ruleCounts = input<RuleCounts | null>(null);
  readonly editable = input(false);
  readonly columnChosen = output<string>();
  readonly outcome = output<DraftOutcome>();
  readonly declined = output<DraftContent['declined']>();
  protected readonly meanings = meanings;
  protected readonly count = count;
  protected readonly absent = ({ valuesComplete }: ColumnProfile): string =>
    valuesComplete ? 'not in this file' : 'not among those listed';

  protected readonly rule = computed(() => this.content().outcome.rule ?? null);
  /** An outcome has a few values; days past due are numbers. */
  protected readonly candidates = computed(() => {
    const byRule = this.rule() !== null;
    return this.profiles().filter(({ valuesComplete, distinct, kind, hashed }) =>
      byRule ? kind === 'numeric' && !hashed && distinct > 0 : valuesComplete && distinct > 0,
    );
  });
  /** Why there is nothing to choose, and what to do about it. */
  protected readonly noCandidates = computed(() => {
    const profiles = this.profiles();
    if (profiles.length === 0 || this.candidates().length > 0) return null;
    if (profiles.length === 1)
      return `The file has one column as it was read, and none that could be the outcome. Look at its first rows under Reading: if another sign stands between the columns, read it again with that one; otherwise bring in a file with an outcome and characteristics.`;
    return this.rule() === null
      ? 'No column can be the outcome by its values: each has more than 50 different ones, or none at all. State the outcome by rule if a column has the days past due; otherwise bring in a file with a column of a few outcomes.'
      : 'No column can have the days past due: none holds numbers as the file was read. Look at the decimal sign and the missing tokens under Reading, or state the outcome by the values of a column.';
  });
  protected readonly values = computed<MappedValue[]>(() => {
    const profile = this.column();
    const { rule: _rule, ...lists } = this.content().outcome;
    return profile ? mappedValues(profile, lists) : [];
  });
  protected readonly decisions = computed<MappedValue[]>(() => {
    const profile = this.decision();
    return profile ? mappedValues(profile, { declined: this.content().declined?.values ?? [] }) : [];
  });

  /** Bad from 90 days past due, indeterminate from 30 until somebody says otherwise (common practice). */
  protected chooseRule(byRule: boolean): void {
    const { rule: _rule, ...values } = this.content().outcome;
    this.outcome.emit(
      byRule ? { ...values, rule: { bad: 90, indeterminate: 30, missing: 'refuse', monthsOnBook: null } } : values,
    );
  }

  protected setRule(rule: DraftOutcomeRule): void {
    this.outcome.emit({ ...this.content().outcome, rule });
  }

  protected map({ value, meaning }: { value: string; meaning: string | null }): void {
    const { outcome } = this.content();
    const without = (list: readonly string[]): string[] => list.filter((entry) => entry !== value);
    const next: DraftOutcome = {
      good: without(outcome.good),
      bad: without(outcome.bad),
      indeterminate: without(outcome.indeterminate),
      excluded: without(outcome.excluded),
    };
    if (meaning !== null) next[meaning as Valued].push(value);
    this.outcome.emit(next);
  }

  protected decline(value: string, on: boolean): void {
    const values = (this.content().declined?.values ?? []).filter((entry) => entry !== value);
    if (on) values.push(value);
    this.declined.emit(values.length > 0 ? { values } : null);
  }
}
