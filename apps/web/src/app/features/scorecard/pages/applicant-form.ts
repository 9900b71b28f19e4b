import { ChangeDetectionStrategy, Component, computed, inject, input, signal, untracked } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import type { Scorecard, ScoredApplicant } from '@tallystone/contracts/scorecards/schema';
import { Problem } from '../../../core/http/problem';
import { Task } from '../../../core/task';
import { type Column } from '../../../ui/column';
import { DenseTable } from '../../../ui/dense-table';
import { binWords, fixed, points, share } from '../../../ui/numbers';
import { ProblemList } from '../../../ui/problem-list';
import { Scorecards } from '../data/scorecards';

/** Score one applicant by form: points by characteristic, the reasons for lost points, and what a score is not. Nothing of it is kept. */
@Component({
  selector: 'ts-applicant-form',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, MatFormFieldModule, MatInputModule, ReactiveFormsModule, DenseTable, ProblemList],
  templateUrl: './applicant-form.html',
  styleUrl: './applicant-form.scss',
})
export class ApplicantForm {
  private readonly scorecards = inject(Scorecards);
  readonly scorecard = input.required<Scorecard>();

  protected readonly scoring = new Task();
  protected readonly scored = signal<ScoredApplicant | null>(null);
  protected readonly fields = computed(() =>
    this.scorecard().characteristics.map(({ column, label, kind, bins }) => ({
      column,
      label,
      numeric: kind === 'numeric',
      suggestions: kind === 'numeric' ? [] : categoriesOf(bins.map((bin) => bin.label)),
    })),
  );
  protected readonly columns: readonly Column<ScoredApplicant['points'][number]>[] = [
    { key: 'label', label: 'Characteristic', value: (row) => row.label },
    { key: 'bin', label: 'Attribute', value: (row) => row.bin, format: (row) => binWords(row.bin) },
    { key: 'woe', label: 'WOE', kind: 'woe', value: (row) => row.woe },
    { key: 'points', label: 'Points', kind: 'points', value: (row) => row.pointsRounded },
  ];
  protected readonly byColumn = (row: { readonly column: string }): string => row.column;

  private readonly names = computed(() => JSON.stringify(this.fields().map(({ column }) => column)));
  /** Made anew only when other characteristics are kept: what was typed outlives a change of scale. */
  protected readonly form = computed(() => {
    const columns = JSON.parse(this.names()) as string[];
    return untracked(() => new FormGroup(Object.fromEntries(columns.map((column) => [column, new FormControl('', { nonNullable: true })]))));
  });

  protected problemOf(column: string): string | null {
    const error = this.scoring.error();
    return error instanceof Problem ? (error.forField(column)?.message ?? null) : null;
  }

  protected async score(): Promise<void> {
    this.scored.set(null);
    const answer = await this.scoring.run(() => this.scorecards.score(this.scorecard().fitId, this.form().getRawValue()));
    this.scored.set(answer ?? null);
  }

  protected clear(): void {
    this.form().reset();
    this.scored.set(null);
    this.scoring.clear();
  }

  protected readonly whole = points;
  protected readonly share = share;
  protected readonly one = (value: number): string => fixed(value, 1);
}

/** Categories named in the labels of bins, to be suggested while typing; what stands for "missing" or "other" is no category. */
export function categoriesOf(labels: readonly string[]): string[] {
  return labels.flatMap((label) => label.split(/,\s+/)).filter((name) => name !== '' && !/^(missing|other|unseen)\b/i.test(name));
}
