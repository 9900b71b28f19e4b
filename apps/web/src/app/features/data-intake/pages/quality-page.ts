import {
  ChangeDetectionStrategy,
  Component,
  type ElementRef,
  computed,
  inject,
  input,
  signal,
  viewChild,
  Injector,
  afterNextRender,
} from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { MatButtonModule } from '@angular/material/button';
import { Router, RouterLink } from '@angular/router';
import { filter } from 'rxjs';
import { takesPart } from '@tallystone/contracts/samples/flags';
import { Runs } from '../../../core/events/runs';
import { newIdempotencyKey } from '../../../core/http/etag';
import { Task } from '../../../core/task';
import { Ask } from '../../../ui/ask';
import type { Column } from '../../../ui/column';
import { CellTemplate, DenseTable } from '../../../ui/dense-table';
import { EmptyState } from '../../../ui/empty-state';
import { CountPipe, MomentPipe } from '../../../ui/number-pipes';
import { plural, share } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { RunProgress } from '../../../ui/run-progress';
import { SortInAddress } from '../../../ui/sort-in-address';
import { Tombstone } from '../../../ui/tombstone';
import {
  type ColumnQuality,
  type ColumnQualityDetail,
  Samples,
  columnQualityOf,
  oneSample,
  qualityOf,
  unreadOf,
} from '../data/samples';
import { plain } from '../ui/findings';
import { ColumnQualityFigures } from '../ui/column-quality';
import { NotReadYet } from '../ui/not-read-yet';
import { type AskedAnswer, QualityFlags } from '../ui/quality-flags';
import { type MonthValue, QualityMonths } from '../ui/quality-months';
import { flagTitle, waits } from '../ui/quality-words';
import { SampleSteps } from '../ui/sample-steps';

/** The data-quality report of a sample, to be read, answered and printed. The chosen column stands in the address. */
@Component({
  selector: 'ts-quality-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { class: 'ts-page' },
  imports: [
    SortInAddress,
    RouterLink,
    MatButtonModule,
    CellTemplate,
    ColumnQualityFigures,
    CountPipe,
    DenseTable,
    EmptyState,
    MomentPipe,
    NotReadYet,
    PageHeader,
    ProblemList,
    QualityFlags,
    QualityMonths,
    RunProgress,
    SampleSteps,
    Tombstone,
  ],
  templateUrl: './quality-page.html',
  styleUrl: './quality-page.scss',
})
export class QualityPage {
  private readonly samples = inject(Samples);
  private readonly injector = inject(Injector);
  private readonly runs = inject(Runs);
  private readonly ask = inject(Ask);
  private readonly router = inject(Router);

  readonly modelId = input.required<string>();
  readonly sampleId = input.required<string>();
  readonly column = input<string>();

  protected readonly sample = oneSample(
    () => this.modelId(),
    () => this.sampleId(),
  );
  /** Null while it is asked for, and where it cannot be read: the resource's own value throws then. */
  protected readonly sampleValue = computed(() => (this.sample.hasValue() ? this.sample.value() : null));
  protected readonly unread = unreadOf(this.sample);
  protected readonly state = qualityOf(
    () => this.modelId(),
    () => this.sampleId(),
  );
  protected readonly report = computed(() => (this.state.hasValue() ? this.state.value().report : null));
  protected readonly abilities = computed(() => (this.state.hasValue() ? this.state.value().abilities : []));
  protected readonly finding = computed(() => (this.state.hasValue() && !this.unread() ? this.state.value().finding : null));
  protected readonly roles = computed(
    () => new Map((this.report()?.columns ?? []).map(({ column, role }) => [column, role] as const)),
  );
  private readonly waiting = computed(() => {
    const columns = new Map<string | null, number>();
    for (const flag of this.report()?.flags ?? [])
      if (waits(flag, this.roles())) columns.set(flag.column, (columns.get(flag.column) ?? 0) + 1);
    return columns;
  });
  protected readonly chosen = computed(() => {
    const columns = this.report()?.columns ?? [];
    return columns.find(({ column }) => column === this.column()) ?? columns.find(({ column }) => this.waiting().has(column)) ?? columns[0] ?? null;
  }); // prettier-ignore
  protected readonly detail = columnQualityOf(
    () => this.modelId(),
    () => this.sampleId(),
    () => this.chosen()?.column ?? null,
  );
  protected readonly answering = new Task();
  protected readonly starting = new Task();
  protected readonly printing = new Task();
  /** What is printed in the place of the chosen column; empty but while it is. */
  protected readonly printed = signal<readonly ColumnQualityDetail[]>([]);
  private readonly flagged = computed(() => {
    const flags = this.report()?.flags ?? [];
    const concerned = (row: ColumnQuality): boolean =>
      takesPart(row.role) && flags.some(({ column, weight }) => column === row.column && weight !== 'note');
    return (this.report()?.columns ?? []).filter(concerned).map(({ column }) => column);
  });
  private readonly started = signal<string | null>(null);
  protected readonly run = this.runs.run(() => this.started() ?? (this.state.hasValue() ? this.state.value().runId : null));
  private readonly columnPart = viewChild<ElementRef<HTMLElement>>('part');

  protected readonly table: readonly Column<ColumnQuality>[] = [
    { key: 'column', label: 'Column', value: (row) => row.column, sortable: true },
    { key: 'role', label: 'Role', value: (row) => row.role, sortable: true },
    { key: 'missing', label: 'Missing', kind: 'share', value: (row) => row.missing / this.rows(), sortable: true },
    { key: 'special', label: 'Special', kind: 'share', value: (row) => row.special / this.rows(), sortable: true },
    { key: 'distinct', label: 'Distinct', kind: 'count', value: (row) => row.distinct, sortable: true },
    { key: 'median', label: 'Median', value: (row) => at(row, 0.5), format: (row) => written(at(row, 0.5)), kind: 'number' },
    {
      key: 'range',
      label: '1 % to 99 %',
      value: (row) => (row.quantiles ? `${at(row, 0.01)} to ${at(row, 0.99)}` : null),
      format: (row) => (row.quantiles ? `${written(at(row, 0.01))} to ${written(at(row, 0.99))}` : '\u2013'),
    },
    {
      key: 'outliers',
      label: 'Outliers',
      kind: 'count',
      value: (row) => (row.outliers ? row.outliers.below + row.outliers.above : null),
      sortable: true,
    },
    { key: 'psi', label: 'Largest PSI', kind: 'number', decimals: 2, value: (row) => row.drift?.psi ?? null, sortable: true },
    { key: 'iv', label: 'IV', kind: 'woe', value: (row) => row.informationValue, sortable: true },
    { key: 'open', label: 'Flags open', kind: 'count', value: (row) => this.waiting().get(row.column) ?? 0, sortable: true },
  ];
  protected readonly months = computed<readonly MonthValue[]>(() =>
    (this.report()?.months ?? []).map(({ month, rows, goods, bads }) => ({
      month,
      value: rows,
      words: `${month}: ${plural(rows, 'row')}, ${goods + bads === 0 ? 'bad rate not told' : `bad rate ${share(bads / (goods + bads))}`}`,
    })),
  );
  protected readonly monthsFinding = computed(() => {
    const report = this.report();
    if (!report || report.months.length === 0) return '';
    const first = report.months[0];
    const last = report.months[report.months.length - 1];
    const compared = report.baseline
      ? `later months are compared with ${report.baseline.from} to ${report.baseline.to}`
      : 'no more than a year, so no month is compared with another';
    return `${plural(report.months.length, 'month')} from ${first.month} to ${last.month}; ${compared}.`;
  });
  constructor() {
    this.runs.finished
      .pipe(
        filter(({ kind, modelId }) => kind === 'sample.quality' && modelId === this.modelId()),
        takeUntilDestroyed(),
      )
      .subscribe(() => {
        this.started.set(null);
        this.state.reload();
      });
  }

  private readonly rows = computed(() => Math.max(1, this.report()?.rows ?? 1));
  protected readonly byColumn = (row: ColumnQuality): string => row.column;
  protected readonly isQuiet = (row: ColumnQuality): boolean => !takesPart(row.role);
  protected readonly isSelected = (row: ColumnQuality): boolean => row.column === this.chosen()?.column;

  /** Shows a column's figures, which stand above the table so that they are seen wherever in it the column was chosen. */
  protected async choose(column: string): Promise<void> {
    await this.router.navigate([], { queryParams: { column }, queryParamsHandling: 'merge', replaceUrl: true });
    this.columnPart()?.nativeElement.scrollIntoView({ block: 'start' });
  }

  /** On paper nobody chooses a column: the figures of every one that a flag of some weight concerns are printed. */
  protected async print(): Promise<void> {
    const details = await this.printing.run(() =>
      Promise.all(this.flagged().map((column) => this.samples.columnQuality(this.modelId(), this.sampleId(), column))),
    );
    if (!details) return;
    this.printed.set(details);
    // The figures measure the room that they have before they are drawn.
    await new Promise((resolve) => afterNextRender(() => setTimeout(resolve, 100), { injector: this.injector }));
    globalThis.print();
    this.printed.set([]);
  }

  protected async make(): Promise<void> {
    const run = await this.starting.run(() => this.samples.makeQuality(this.modelId(), this.sampleId(), newIdempotencyKey()));
    if (!run) return;
    this.runs.follow(run);
    this.started.set(run.id);
  }

  protected async answer({ flag, answer }: AskedAnswer): Promise<void> {
    const what = `${flag.column ?? 'The file'}: ${flagTitle(flag).replace('?', '')}`;
    const given = await this.ask.for({
      title: answer === 'accepted' ? 'Accept this flag?' : `Leave ${flag.column ?? ''} out?`,
      text:
        answer === 'accepted'
          ? `${what}. ${flag.finding}`
          : `${what}. The draft sets the column to “not used”; the definition that is confirmed stays as it is, the next one follows.`,
      accept: answer === 'accepted' ? 'Accept' : 'Not used',
      reason: { label: 'Because', required: true, hint: 'Kept in the record and printed in the documentation.' },
    });
    if (!given) return;
    const state = await this.answering.run(() =>
      this.samples.answer(this.modelId(), this.sampleId(), {
        column: flag.column,
        code: flag.code,
        answer,
        reason: given.reason,
      }),
    );
    if (state) this.state.set(state);
  }
}

const at = ({ quantiles }: ColumnQuality, wanted: number): number | null =>
  quantiles?.find((entry) => entry.share === wanted)?.value ?? null;
const written = (value: number | null): string => (value === null ? '\u2013' : plain(value));
