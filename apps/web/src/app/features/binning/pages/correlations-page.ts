import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { Router, RouterLink } from '@angular/router';
import { nearlyTheSame } from '@tallystone/numeric/diagnostics/clusters';
import { filter } from 'rxjs';
import { Runs } from '../../../core/events/runs';
import { newIdempotencyKey } from '../../../core/http/etag';
import { Task } from '../../../core/task';
import type { Column } from '../../../ui/column';
import { DecisionNotice } from '../../../ui/decision-notice';
import { DenseTable } from '../../../ui/dense-table';
import { EmptyState } from '../../../ui/empty-state';
import { DASH, fixed, moment, plural } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { RunProgress } from '../../../ui/run-progress';
import { SortInAddress } from '../../../ui/sort-in-address';
import { Binnings, binningOf, correlationsOf } from '../data/binnings';
import { CorrelationFigure } from '../ui/correlation-figure';
import { type Standing, changedWords, correlationFinding, inflationLimit, readCorrelations } from '../ui/correlation-reading';

/** Which characteristics say the same: correlations of WOE, groups at a threshold that stands in the address, variance inflation. */
@Component({
  selector: 'ts-correlations-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [
    SortInAddress,
    RouterLink,
    MatButtonModule,
    MatFormFieldModule,
    MatInputModule,
    CorrelationFigure,
    DecisionNotice,
    DenseTable,
    EmptyState,
    PageHeader,
    ProblemList,
    RunProgress,
  ],
  host: { class: 'ts-page' },
  template: `
    <div class="ts-stack">
      <ts-page-header title="Correlations" [finding]="finding()">
        @if (mayCalculate() && correlations()?.calculatedAt && !run()) {
          <button matButton="outlined" type="button" [disabled]="starting.busy()" (click)="calculate()">Calculate anew</button>
        }
        <a matButton="outlined" [routerLink]="['/models', modelId(), 'binning', binningId()]">All characteristics</a>
      </ts-page-header>
      <ts-problems [error]="found.error() ?? starting.error()">
        <button matButton="outlined" type="button" (click)="found.reload()">Try again</button>
      </ts-problems>
      @if (run()) {
        <ts-run-progress [run]="run()" title="Correlating the characteristics" />
      }
      @if (correlations(); as correlations) {
        @if (!correlations.calculatedAt) {
          @if (!run()) {
            <ts-empty
              title="No correlations yet"
              text="They are calculated from the WOE of development rows, in the bins as they are."
            >
              @if (mayCalculate()) {
                <button matButton="outlined" type="button" [disabled]="starting.busy()" (click)="calculate()">
                  Calculate correlations
                </button>
              }
            </ts-empty>
          }
        } @else {
          @if (changed(); as changed) {
            <ts-decision>
              <b>{{ changed }}</b> since these figures were calculated.
              @if (mayCalculate()) {
                <button tsDecide matButton="outlined" type="button" [disabled]="starting.busy()" (click)="calculate()">
                  Calculate anew
                </button>
              }
            </ts-decision>
          }
          <form class="limit" (submit)="$event.preventDefault()">
            <mat-form-field>
              <mat-label>Grouped from a correlation of</mat-label>
              <input matInput type="number" min="0.05" max="1" step="0.05" [value]="limit()" (change)="ask($event)" />
            </mat-form-field>
          </form>
          @if (reading(); as reading) {
            @if (correlations.characteristics.length > 1) {
              <ts-correlation-figure [correlations]="correlations" [reading]="reading" [finding]="note()" />
            }
            <section aria-label="Characteristics and their groups">
              <h3>Groups and variance inflation</h3>
              <ts-table
                caption="Groups and variance inflation"
                [columns]="columns"
                [rows]="reading.standings"
                [identify]="identify"
                [selected]="flagged"
                tsSortInAddress="group.up"
              />
            </section>
          }
          <p class="ts-caption">
            Pearson correlation of WOE over {{ rowsWords() }} of development, calculated {{ when() }}. In a group every two
            characteristics correlate by the threshold or more, in either direction (complete linkage, S. C. Johnson, 1967). A
            correlation of 0.7 and a VIF of {{ inflationLimit }} are flagged by common practice; a limit is the lender’s to set.
            One of a group is often enough: the penalty chooses among them by chance otherwise.
          </p>
        }
      } @else if (!found.error()) {
        <div class="loading" aria-busy="true"></div>
      }
    </div>
  `,
  styles: `
    .limit {
      max-width: 280px;
    }
    .loading {
      min-height: 160px;
    }
  `,
})
export class CorrelationsPage {
  private readonly binnings = inject(Binnings);
  private readonly router = inject(Router);
  private readonly runs = inject(Runs);

  readonly modelId = input.required<string>();
  readonly binningId = input.required<string>();
  readonly from = input<string>();

  protected readonly binning = binningOf(() => this.binningId());
  protected readonly found = correlationsOf(() => this.binningId());
  protected readonly starting = new Task();
  protected readonly inflationLimit = inflationLimit;
  protected readonly correlations = computed(() => (this.found.hasValue() ? this.found.value() : null));
  protected readonly mayCalculate = computed(() => this.correlations()?.abilities.includes('calculate') ?? false);
  private readonly known = this.runs.run(() => this.correlations()?.runId);
  protected readonly run = computed(() => (this.correlations()?.runId ? this.known() : null));
  protected readonly limit = computed(() => {
    const asked = Number(this.from() ?? nearlyTheSame);
    return asked >= 0.05 && asked <= 1 ? asked : nearlyTheSame;
  });
  protected readonly reading = computed(() => {
    const correlations = this.correlations();
    return correlations?.calculatedAt ? readCorrelations(correlations, this.limit()) : null;
  });
  protected readonly finding = computed(() => {
    const reading = this.reading();
    return reading && correlationFinding(reading, this.limit());
  });
  protected readonly note = computed(() => {
    const flagged = this.reading()?.pairs.filter((pair) => pair.flagged).length ?? 0;
    return `${plural(flagged, 'pair')} at ${fixed(this.limit(), 2)} or more. Filled: they rise together; hollow: one falls as the other rises.`;
  });
  /** Nothing while they are calculated anew. */
  protected readonly changed = computed(() => {
    const correlations = this.correlations();
    return correlations && !this.run() ? changedWords(correlations) : null;
  });
  protected readonly rowsWords = computed(() => plural(this.correlations()?.rows ?? 0, 'row'));
  protected readonly when = computed(() => {
    const at = this.correlations()?.calculatedAt;
    return at ? moment(at) : '';
  });
  protected readonly columns: readonly Column<Standing>[] = [
    { key: 'column', label: 'Characteristic', value: (row) => row.column, link: (row) => ['..', row.id], sortable: true },
    { key: 'group', label: 'Group', kind: 'count', value: (row) => row.group, sortable: true },
    {
      key: 'strongest',
      label: 'In its group',
      value: (row) => (row.group === null ? null : row.strongest ? 'largest IV' : 'smaller IV'),
      sortable: true,
    },
    { key: 'iv', label: 'IV', kind: 'number', decimals: 3, value: (row) => row.informationValue, sortable: true },
    {
      key: 'vif',
      label: 'VIF',
      kind: 'number',
      decimals: 2,
      value: (row) => row.inflation,
      format: (row) => (row.collinear ? 'no limit' : row.inflation === null ? DASH : fixed(row.inflation, 2)),
      sortable: true,
    },
    { key: 'nearest', label: 'Nearest', value: (row) => row.nearest, sortable: true },
    {
      key: 'correlation',
      label: 'Correlation',
      kind: 'number',
      decimals: 2,
      value: (row) => row.nearestCorrelation,
      sortable: true,
    },
  ];

  constructor() {
    this.runs.finished
      .pipe(
        filter((run) => run.kind === 'binning.correlate' && run.entityId === this.binningId()),
        takeUntilDestroyed(),
      )
      .subscribe(() => this.found.reload());
  }

  protected readonly identify = (row: Standing): string => row.id;
  protected readonly flagged = (row: Standing): boolean => row.collinear || (row.inflation ?? 0) > inflationLimit;

  protected ask(event: Event): void {
    const value = (event.target as HTMLInputElement).valueAsNumber;
    const from = Number.isFinite(value) && value !== nearlyTheSame ? String(value) : null;
    void this.router.navigate([], { queryParams: { from }, queryParamsHandling: 'merge', replaceUrl: true });
  }

  protected calculate(): void {
    void this.starting.run(async () => {
      await this.binnings.calculateCorrelations(this.binningId(), newIdempotencyKey());
      this.found.reload();
    });
  }
}
