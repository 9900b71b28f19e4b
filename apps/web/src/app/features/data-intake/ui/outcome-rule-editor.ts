import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatSelectModule } from '@angular/material/select';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DraftOutcomeRule, RuleCounts } from '@tallystone/contracts/samples/definition';
import { type Column } from '../../../ui/column';
import { DenseTable } from '../../../ui/dense-table';
import { share } from '../../../ui/numbers';
import { type RulePart, rangeOf, ruleParts } from './findings';

/** Good, bad, indeterminate and excluded by days past due and months on book, with what each part takes of the rows. */
@Component({
  selector: 'ts-outcome-rule-editor',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatFormFieldModule, MatInputModule, MatSelectModule, DenseTable],
  template: `
    <div class="fields">
      <mat-form-field subscriptSizing="dynamic">
        <mat-label>Bad from, days past due</mat-label>
        <input matInput type="number" min="1" step="1" [value]="rule().bad" [disabled]="!editable()" (change)="setBad($event)" />
      </mat-form-field>
      <mat-form-field subscriptSizing="dynamic">
        <mat-label>Indeterminate from; empty = none</mat-label>
        <input
          matInput
          type="number"
          min="0"
          step="1"
          [value]="rule().indeterminate ?? ''"
          [disabled]="!editable()"
          (change)="setIndeterminate($event)"
        />
      </mat-form-field>
      <mat-form-field subscriptSizing="dynamic">
        <mat-label>Months on book</mat-label>
        <mat-select
          [value]="rule().monthsOnBook?.column ?? ''"
          [disabled]="!editable()"
          (selectionChange)="setMonthsColumn($event.value)"
        >
          <mat-option value="">no such rule</mat-option>
          @for (profile of monthColumns(); track profile.column) {
            <mat-option [value]="profile.column">{{ profile.column }}</mat-option>
          }
        </mat-select>
      </mat-form-field>
      @if (rule().monthsOnBook; as months) {
        <mat-form-field subscriptSizing="dynamic">
          <mat-label>Excluded below, months</mat-label>
          <input matInput type="number" min="1" step="1" [value]="months.least" [disabled]="!editable()" (change)="setLeast($event)" />
        </mat-form-field>
      }
      <mat-form-field subscriptSizing="dynamic">
        <mat-label>Where these are missing</mat-label>
        <mat-select [value]="rule().missing" [disabled]="!editable()" (selectionChange)="set({ missing: $event.value })">
          <mat-option value="refuse">to be settled first</mat-option>
          <mat-option value="excluded">excluded</mat-option>
        </mat-select>
      </mat-form-field>
    </div>
    @if (days(); as profile) {
      <p class="ts-caption">{{ profile.column }} runs from {{ range(profile) }}. Numbers below 0 are no days past due and have to be settled.</p>
    }
    <div class="gives" [attr.aria-busy]="counts() === null">
      <ts-table caption="What the rule gives" [columns]="columns" [rows]="parts()" [identify]="byKey" [quiet]="isNone" />
      <p>
        @if (counts(); as given) {
          Bad rate <b>{{ rate(given.badRate) }}</b> of the goods and bads of development and hold-out; out-of-time is not counted here.
        } @else {
          <span class="ts-second">Counted once the change is saved and nothing is left to settle below.</span>
        }
      </p>
    </div>
  `,
  styles: `
    :host,
    .gives {
      display: grid;
      gap: 12px;
      grid-template-columns: minmax(0, 1fr);
    }
    .fields {
      display: grid;
      grid-template-columns: repeat(auto-fill, minmax(min(100%, 230px), 1fr));
      gap: 14px 16px;
      max-width: 760px;
    }
  `,
})
export class OutcomeRuleEditor {
  readonly rule = input.required<DraftOutcomeRule>();
  /** The column with the role of the outcome: days past due. */
  readonly days = input<ColumnProfile | null>(null);
  readonly profiles = input.required<readonly ColumnProfile[]>();
  /** Null while the rows are not counted. */
  readonly counts = input<RuleCounts | null>(null);
  readonly editable = input(false);
  readonly changed = output<DraftOutcomeRule>();

  protected readonly range = rangeOf;
  protected readonly rate = share;
  protected readonly monthColumns = computed(() =>
    this.profiles().filter(({ kind, hashed, column }) => kind === 'numeric' && !hashed && column !== this.days()?.column),
  );
  protected readonly parts = computed(() => ruleParts(this.rule(), this.days()?.column ?? 'days past due', this.counts()));
  protected readonly byKey = (part: RulePart): string => part.key;
  protected readonly isNone = (part: RulePart): boolean => part.rows === 0;
  protected readonly columns: readonly Column<RulePart>[] = [
    { key: 'part', label: 'Outcome', value: (part) => part.label, sortable: false },
    { key: 'means', label: 'Rows for which', value: (part) => part.means, width: 40, sortable: false },
    { key: 'rows', label: 'Rows', kind: 'count', value: (part) => part.rows, sortable: false },
  ];

  protected set(change: Partial<DraftOutcomeRule>): void {
    this.changed.emit({ ...this.rule(), ...change });
  }

  protected setBad(event: Event): void {
    const bad = amount(event);
    if (bad !== null && bad > 0) this.set({ bad });
    else restore(event, this.rule().bad);
  }

  protected setIndeterminate(event: Event): void {
    const indeterminate = amount(event);
    if (indeterminate === null || indeterminate >= 0) this.set({ indeterminate });
    else restore(event, this.rule().indeterminate ?? '');
  }

  protected setMonthsColumn(column: string): void {
    const least = this.rule().monthsOnBook?.least ?? 12;
    this.set({ monthsOnBook: column === '' ? null : { column, least } });
  }

  protected setLeast(event: Event): void {
    const months = this.rule().monthsOnBook;
    const least = amount(event);
    if (months && least !== null && least > 0) this.set({ monthsOnBook: { ...months, least } });
    else restore(event, months?.least ?? '');
  }
}

/** Null for an empty field; what is no number the browser gives as empty. */
function amount(event: Event): number | null {
  const text = (event.target as HTMLInputElement).value.trim();
  return text === '' ? null : Number(text);
}

function restore(event: Event, value: number | ''): void {
  (event.target as HTMLInputElement).value = String(value);
}
