import { ChangeDetectionStrategy, Component, computed, effect, inject, input, signal } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule, Validators } from '@angular/forms';
import { takeUntilDestroyed, toSignal } from '@angular/core/rxjs-interop';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatSelectModule } from '@angular/material/select';
import { Router, RouterLink } from '@angular/router';
import { filter } from 'rxjs';
import { CurrentModel } from '../../../core/current-model';
import { Runs } from '../../../core/events/runs';
import { newIdempotencyKey } from '../../../core/http/etag';
import { Task } from '../../../core/task';
import type { Column } from '../../../ui/column';
import { CellTemplate, DenseTable } from '../../../ui/dense-table';
import { EmptyState } from '../../../ui/empty-state';
import { plural } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { RunProgress } from '../../../ui/run-progress';
import { SortInAddress } from '../../../ui/sort-in-address';
import { StatusMark } from '../../../ui/status-mark';
import { type BinningSummary, type StartingPoint, Binnings, binningsOf } from '../data/binnings';
import { ConstraintsFields, constraintsForm, constraintsOf } from '../ui/constraints-form';

const stateWords: Record<BinningSummary['state'], string> = {
  queued: 'Waiting for a worker',
  classing: 'Being classed',
  ready: 'Ready',
  failed: 'Did not finish',
  cancelled: 'Cancelled',
};

/** Binnings of a model, and the start of a new one from a confirmed sample. */
@Component({
  selector: 'ts-binnings-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [
    SortInAddress,
    ReactiveFormsModule,
    RouterLink,
    MatButtonModule,
    MatFormFieldModule,
    MatInputModule,
    MatSelectModule,
    CellTemplate,
    ConstraintsFields,
    DenseTable,
    EmptyState,
    PageHeader,
    ProblemList,
    RunProgress,
    StatusMark,
  ],
  host: { class: 'ts-page' },
  templateUrl: './binnings-page.html',
  styles: `
    form {
      display: grid;
      gap: 20px;
      max-width: 720px;
    }
    .loading {
      min-height: 120px;
    }
  `,
})
export class BinningsPage {
  private readonly binnings = inject(Binnings);
  private readonly runs = inject(Runs);
  private readonly router = inject(Router);
  private readonly current = inject(CurrentModel);

  readonly modelId = input.required<string>();

  protected readonly list = binningsOf(() => this.modelId());
  protected readonly points = signal<readonly StartingPoint[] | null>(null);
  protected readonly beginning = signal(false);
  protected readonly loading = new Task();
  protected readonly starting = new Task();
  protected readonly form = new FormGroup({
    fromBinningId: new FormControl<string | null>(null),
    definitionId: new FormControl('', { nonNullable: true, validators: [Validators.required] }),
    name: new FormControl('', {
      nonNullable: true,
      validators: [Validators.required, Validators.maxLength(120), Validators.pattern(/\S/)],
    }),
  });
  private readonly fromBinningId = toSignal(this.form.controls.fromBinningId.valueChanges, { initialValue: null });
  /** The binning that is started from. */
  protected readonly earlierName = computed(() => this.ready().find(({ id }) => id === this.fromBinningId())?.name ?? null);
  protected readonly constraints = constraintsForm();
  private key = newIdempotencyKey();

  protected readonly all = computed(() => (this.list.hasValue() ? this.list.value().binnings : null));
  /** Earlier binnings whose decisions a new one can start from. */
  protected readonly ready = computed(() => (this.all() ?? []).filter(({ state }) => state === 'ready'));
  protected readonly mayStart = computed(() => this.list.hasValue() && this.list.value().abilities.includes('start-binning'));
  protected readonly running = computed(
    () => this.all()?.find(({ state }) => state === 'queued' || state === 'classing') ?? null,
  );
  protected readonly run = this.runs.run(() => this.running()?.runId);
  protected readonly finding = computed(() => {
    const all = this.all();
    if (!all || all.length === 0) return null;
    const ready = all.filter(({ state }) => state === 'ready');
    if (ready.length === 0)
      return this.running() ? 'The characteristics are being classed.' : 'No binning has its characteristics classed yet.';
    const latest = ready[0];
    const edits = latest.edits === 0 ? 'no manual edit' : plural(latest.edits, 'manual edit');
    return `${latest.name} takes ${plural(latest.included, 'characteristic')} of ${latest.characteristics}, with ${edits}.`;
  });
  protected readonly columns: readonly Column<BinningSummary>[] = [
    {
      key: 'name',
      label: 'Binning',
      value: (row) => row.name,
      // One that did not finish says there why, and is started again.
      link: (row) => (row.state === 'ready' || row.state === 'failed' ? [row.id] : null),
      sortable: true,
    },
    { key: 'state', label: 'State', value: (row) => stateWords[row.state] },
    { key: 'sample', label: 'Sample', value: (row) => (row.erased ? `${row.sample}, rows erased` : row.sample) },
    { key: 'included', label: 'Included', kind: 'count', value: (row) => row.included },
    { key: 'characteristics', label: 'Classed', kind: 'count', value: (row) => row.characteristics },
    { key: 'edits', label: 'Edits', kind: 'count', value: (row) => row.edits },
    { key: 'unexplained', label: 'Not explained', kind: 'count', value: (row) => row.editsWithoutReason },
    { key: 'by', label: 'By', value: (row) => row.createdBy },
    { key: 'at', label: 'Started', kind: 'moment', value: (row) => row.createdAt, sortable: true },
  ];
  protected readonly stateWords = stateWords;
  protected readonly identify = (row: BinningSummary): string => row.id;

  constructor() {
    // A first binning needs no button: the form is what this page is for.
    effect(() => {
      if (this.all()?.length === 0 && this.mayStart()) void this.begin();
    });
    this.runs.finished
      .pipe(
        filter((run) => run.kind === 'binning.class' && run.modelId === this.modelId()),
        takeUntilDestroyed(),
      )
      .subscribe((run) => {
        this.list.reload();
        void this.current.reload();
        if (run.state === 'succeeded' && run.entityId && this.started === run.entityId) {
          void this.router.navigate(['/models', this.modelId(), 'binning', run.entityId]);
        }
      });
  }

  private started: string | null = null;

  protected tone(state: BinningSummary['state']): 'kept' | 'under-way' | 'refused' | 'ended' {
    if (state === 'ready') return 'kept';
    return state === 'failed' ? 'refused' : state === 'cancelled' ? 'ended' : 'under-way';
  }

  protected async begin(): Promise<void> {
    if (this.beginning()) return;
    this.beginning.set(true);
    await this.loading.run(async () => {
      const points = await this.binnings.startingPoints(this.modelId());
      this.points.set(points);
      const number = (this.all()?.length ?? 0) + 1;
      this.form.setValue({ definitionId: points[0]?.definitionId ?? '', name: `Binning ${number}`, fromBinningId: null });
    });
  }

  protected start(): void {
    this.form.markAllAsTouched();
    this.constraints.markAllAsTouched();
    if (this.form.invalid || this.constraints.invalid) return;
    void this.starting.run(async () => {
      const { definitionId, name, fromBinningId } = this.form.getRawValue();
      const binning = await this.binnings.start(
        this.modelId(),
        { definitionId, name: name.trim(), constraints: constraintsOf(this.constraints), fromBinningId },
        this.key,
      );
      this.key = newIdempotencyKey();
      this.started = binning.id;
      this.beginning.set(false);
      this.list.reload();
    });
  }
}
