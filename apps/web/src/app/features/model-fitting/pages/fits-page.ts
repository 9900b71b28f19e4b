import { ChangeDetectionStrategy, Component, DestroyRef, computed, inject, input, signal } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { MatButtonModule } from '@angular/material/button';
import { MatCheckboxModule } from '@angular/material/checkbox';
import { RouterLink } from '@angular/router';
import { inferenceNames } from '@tallystone/contracts/fits/inference';
import type { FitSummary } from '@tallystone/contracts/fits/schema';
import { filter } from 'rxjs';
import { Runs } from '../../../core/events/runs';
import { type Column } from '../../../ui/column';
import { CellTemplate, DenseTable } from '../../../ui/dense-table';
import { EmptyState } from '../../../ui/empty-state';
import { plural, significant } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { RunProgress } from '../../../ui/run-progress';
import { StatusMark, type StatusTone } from '../../../ui/status-mark';
import { Fits } from '../data/fits';

const kindOf = (mixing: number): string => (mixing === 1 ? 'Lasso (L1)' : mixing === 0 ? 'Ridge (L2)' : `Elastic net, mixing ${significant(mixing, 2)}`);

/** Every fit of a model; two or more can be taken to the comparison. */
@Component({
  selector: 'ts-fits-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [
    MatButtonModule,
    MatCheckboxModule,
    RouterLink,
    CellTemplate,
    DenseTable,
    EmptyState,
    PageHeader,
    ProblemList,
    RunProgress,
    StatusMark,
  ],
  template: `
    <div class="ts-page ts-stack">
      <ts-page-header title="Fits" [finding]="finding()">
        @if (mayStart() && fits().length > 0) {
          <a matButton="filled" routerLink="new">New fit</a>
        }
        @if (picked().length >= 2) {
          <a matButton="outlined" [routerLink]="['/models', modelId(), 'comparison']" [queryParams]="{ fits: picked().join(',') }">
            Compare {{ picked().length }} fits
          </a>
        }
      </ts-page-header>
      @if (list.error(); as error) {
        <ts-problems [error]="error" />
      }
      @for (run of runsUnderWay(); track run.id) {
        <ts-run-progress [run]="run" title="Fitting the penalty path" />
      }
      @if (list.hasValue() && fits().length === 0) {
        <ts-empty
          title="No fit yet"
          text="A fit runs penalised logistic regression over a whole path of penalties, with cross-validation. It starts from a binning."
        >
          @if (mayStart()) {
            <a matButton="filled" routerLink="new">New fit</a>
          }
        </ts-empty>
      } @else if (list.hasValue()) {
        <ts-table caption="Fits of this model" [columns]="columns" [rows]="fits()" [identify]="byId">
          <ng-template tsCell="pick" let-row>
            <mat-checkbox
              [checked]="picked().includes(row.id)"
              [disabled]="row.state !== 'ready' || row.erased !== null"
              [aria-label]="'Compare ' + row.name"
              (change)="pick(row.id, $event.checked)"
            />
          </ng-template>
          <ng-template tsCell="state" let-row>
            <ts-status [tone]="tone(row)">{{ words(row) }}</ts-status>
          </ng-template>
        </ts-table>
        <p class="ts-caption">Mark two to five fits to compare them on the same rows.</p>
      }
    </div>
  `,
})
export class FitsPage {
  private readonly data = inject(Fits);
  private readonly runs = inject(Runs);

  readonly modelId = input.required<string>();

  protected readonly list = this.data.list(() => this.modelId());
  protected readonly fits = computed(() => (this.list.hasValue() ? this.list.value().fits : []));
  protected readonly mayStart = computed(() => this.list.hasValue() && this.list.value().abilities.includes('start-fit'));
  protected readonly picked = signal<readonly string[]>([]);
  protected readonly runsUnderWay = computed(() => this.runs.active().filter((run) => run.modelId === this.modelId() && run.kind === 'fit.path'));
  protected readonly finding = computed(() => {
    const fits = this.fits();
    if (fits.length === 0) return null;
    const ready = fits.filter((fit) => fit.state === 'ready');
    const chosen = ready.filter((fit) => fit.choice !== null).length;
    return `${plural(ready.length, 'fit')} ready, ${chosen === 0 ? 'no penalty chosen yet' : `${chosen} with a penalty chosen`}.`;
  });

  protected readonly columns: readonly Column<FitSummary>[] = [
    { key: 'name', label: 'Fit', value: (fit) => `${fit.number}. ${fit.name}`, link: (fit) => [fit.id] },
    { key: 'pick', label: 'Compare', value: () => '', sortable: false },
    { key: 'penalty', label: 'Penalty', value: (fit) => kindOf(fit.mixing) },
    { key: 'inference', label: 'Declined', value: (fit) => inferenceNames[fit.inference] },
    { key: 'binning', label: 'Binning', value: (fit) => `${fit.binningName}${fit.stale ? ' (changed since)' : ''}` },
    { key: 'state', label: 'State', value: (fit) => fit.state },
    { key: 'kept', label: 'Kept', kind: 'count', value: (fit) => fit.choice?.kept ?? null },
    { key: 'lambda', label: 'Chosen penalty', kind: 'number', value: (fit) => fit.choice?.lambda ?? null, format: (fit) => significant(fit.choice?.lambda, 2) },
    { key: 'auc', label: 'Hold-out AUC', kind: 'metric', value: (fit) => fit.holdOutAuc },
    { key: 'by', label: 'By', value: (fit) => fit.createdBy },
    { key: 'at', label: 'Fitted', kind: 'moment', value: (fit) => fit.createdAt },
  ];
  protected readonly byId = (fit: FitSummary): string => fit.id;

  constructor() {
    this.runs.finished
      .pipe(
        filter((run) => run.modelId === this.modelId() && run.kind === 'fit.path'),
        takeUntilDestroyed(inject(DestroyRef)),
      )
      .subscribe(() => this.list.reload());
  }

  protected pick(id: string, on: boolean): void {
    this.picked.update((ids) => (on ? [...ids, id].slice(-5) : ids.filter((entry) => entry !== id)));
  }

  protected tone(fit: FitSummary): StatusTone {
    if (fit.erased) return fit.state === 'failed' ? 'refused' : 'ended';
    if (fit.state === 'ready') return fit.choice ? 'kept' : 'waiting';
    if (fit.state === 'failed') return 'refused';
    return fit.state === 'cancelled' ? 'ended' : 'under-way';
  }

  protected words(fit: FitSummary): string {
    if (fit.state === 'ready' && fit.erased) return fit.choice ? 'penalty chosen, rows erased' : 'rows erased';
    if (fit.state === 'ready') return fit.choice ? 'penalty chosen' : 'choose a penalty';
    return fit.state === 'queued' ? 'waiting' : fit.state;
  }
}
