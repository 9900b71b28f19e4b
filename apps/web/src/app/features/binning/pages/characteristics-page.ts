import { ChangeDetectionStrategy, Component, Injector, computed, inject, input, signal } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { MatButtonModule } from '@angular/material/button';
import { MatCheckboxModule } from '@angular/material/checkbox';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatSelectModule } from '@angular/material/select';
import { Router, RouterLink } from '@angular/router';
import { Subject, debounceTime, filter, firstValueFrom } from 'rxjs';
import { CurrentModel } from '../../../core/current-model';
import { columnLabels } from '../../../core/column-labels';
import { Runs, hasEnded } from '../../../core/events/runs';
import { newIdempotencyKey } from '../../../core/http/etag';
import { mostReclassedAtOnce } from '@tallystone/contracts/binnings/limits';
import { Task } from '../../../core/task';
import { Ask } from '../../../ui/ask';
import type { Column } from '../../../ui/column';
import { DecisionNotice } from '../../../ui/decision-notice';
import { CellTemplate, DenseTable } from '../../../ui/dense-table';
import { plural } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { Tombstone } from '../../../ui/tombstone';
import { RunProgress } from '../../../ui/run-progress';
import { SortInAddress } from '../../../ui/sort-in-address';
import { type CharacteristicList, type CharacteristicSummary, Binnings, binningOf, characteristicsOf } from '../data/binnings';
import { asPart, filtered, intervalText, partWords, riskTrend, shownParts, warningsOf } from '../ui/characteristic-filter';
import { changedWords } from '../ui/correlation-reading';
import { usualConstraints } from '../ui/constraints-form';
import { OutOfTimeCover } from '../ui/out-of-time-cover';
import type { ReclassAnswer, ReclassQuestion } from '../ui/reclass-dialog';

/** Every characteristic of a binning with what its bins say. Search, part and order stand in the address. */
@Component({
  selector: 'ts-characteristics-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [
    SortInAddress,
    RouterLink,
    MatButtonModule,
    MatCheckboxModule,
    MatFormFieldModule,
    MatInputModule,
    MatSelectModule,
    CellTemplate,
    DecisionNotice,
    DenseTable,
    OutOfTimeCover,
    PageHeader,
    ProblemList,
    Tombstone,
    RunProgress,
  ],
  host: { class: 'ts-page' },
  templateUrl: './characteristics-page.html',
  styleUrl: './characteristics-page.scss',
})
export class CharacteristicsPage {
  private readonly binnings = inject(Binnings);
  private readonly router = inject(Router);
  private readonly asking = inject(Ask);
  private readonly injector = inject(Injector);
  private readonly runs = inject(Runs);
  private readonly current = inject(CurrentModel);

  readonly modelId = input.required<string>();
  readonly binningId = input.required<string>();
  readonly search = input<string>();
  readonly show = input<string>();

  protected readonly binning = binningOf(() => this.binningId());
  private readonly labels = columnLabels(() => (this.binning.hasValue() ? this.binning.value().definitionId : null));
  protected readonly list = characteristicsOf(() => this.binningId());
  protected readonly changing = new Task();
  protected readonly chosen = signal<ReadonlySet<string>>(new Set());
  protected readonly parts = shownParts;
  protected readonly partWords = partWords;
  protected readonly part = computed(() => asPart(this.show()));
  protected readonly mayEdit = computed(() => this.binning.hasValue() && this.binning.value().abilities.includes('edit'));
  private readonly opened = computed(() => this.binning.hasValue() && this.binning.value().outOfTime === 'opened');
  /** Without an application date nothing can be told by month. */
  private readonly dated = computed(() => (this.all() ?? []).some(({ stability }) => stability.byMonth !== null));
  protected readonly isReady = computed(() => this.binning.hasValue() && this.binning.value().state === 'ready');
  protected readonly mayOpen = computed(
    () => this.current.can('develop') && this.binning.hasValue() && this.binning.value().erased === null,
  );
  /** A binning whose run ended without bins stays as it is; another takes its place. */
  protected readonly mayStartAgain = computed(
    () => this.mayOpen() && this.binning.hasValue() && ['failed', 'cancelled'].includes(this.binning.value().state),
  );
  protected readonly startsFrom = computed(() => {
    const from = this.binning.hasValue() ? this.binning.value().from : null;
    return from ? `, starting from ${from.name}` : '';
  });
  protected readonly starting = new Task();
  private key = newIdempotencyKey();
  protected readonly run = this.runs.run(() => (this.binning.hasValue() ? this.binning.value().runId : null));
  private readonly reclassings = this.runs.forModel(() => this.modelId(), 'binning.reclass');
  /** The run that was started on this page and has not ended well, which stays until the page is left. */
  private readonly reclassingId = signal<string | null>(null);
  /** The run that classes many characteristics anew, while there is one, wherever it was started. */
  protected readonly reclassing = computed(
    () => this.reclassings().find((run) => run.entityId === this.binningId() && (!hasEnded(run) || run.id === this.reclassingId())) ?? null,
  );
  protected readonly underWay = computed(() => {
    const run = this.reclassing();
    return run !== null && !hasEnded(run);
  });
  protected readonly all = computed(() => (this.list.hasValue() ? this.list.value().characteristics : null));
  protected readonly rows = computed(() => filtered(this.all() ?? [], this.part(), this.search() ?? '', this.labels()));
  protected readonly finding = computed(() => (this.list.hasValue() ? this.list.value().finding : null));
  /** Groups that no longer speak of the bins as they are; nothing while they are calculated anew. */
  protected readonly staleGroups = computed(() => {
    const standing = this.list.hasValue() ? this.list.value().correlations : null;
    return standing && standing.runId === null ? changedWords(standing) : null;
  });
  /** Edits not carried over that a characteristic of this binning shows. */
  protected readonly notCarriedHere = computed(() => (this.all() ?? []).reduce((sum, { notCarried }) => sum + notCarried, 0));
  protected readonly carriedWords = computed(() => {
    const from = this.binning.hasValue() ? this.binning.value().from : null;
    if (!from) return null;
    const kept = `${plural(from.carried, 'edit')} by hand of ${from.name} ${from.carried === 1 ? 'is' : 'are'} carried over`;
    return from.notCarried === 0
      ? `${kept}; none is lost.`
      : `${kept}; ${from.notCarried} ${from.notCarried === 1 ? 'makes' : 'make'} no sense on this sample.`;
  });
  /** Decisions about columns that are not classed here, in words. */
  protected readonly notHere = computed(() => {
    const from = this.binning.hasValue() ? this.binning.value().from : null;
    return (from?.notHere ?? []).map(({ column, edits, leftOut, why }) => ({
      column,
      words: `${[edits > 0 ? plural(edits, 'edit') : '', leftOut === null ? '' : `left out: ${leftOut}`].filter(Boolean).join('; ')}. ${why}`,
    }));
  });
  protected readonly picked = computed(() => (this.all() ?? []).filter(({ id }) => this.chosen().has(id)));
  protected readonly pickedWords = computed(() => `${plural(this.picked().length, 'characteristic')} chosen`);
  protected readonly someIncluded = computed(() => this.picked().some(({ included }) => included));
  protected readonly someLeftOut = computed(() => this.picked().some(({ included }) => !included));
  protected readonly allChosen = computed(() => this.rows().length > 0 && this.rows().every(({ id }) => this.chosen().has(id)));
  protected readonly columns = computed<readonly Column<CharacteristicSummary>[]>(() => [
    { key: 'column', label: 'Characteristic', value: (row) => row.column, link: (row) => [row.id], sortable: true },
    ...(this.labels().size > 0
      ? [
          {
            key: 'label',
            label: 'Label',
            value: (row: CharacteristicSummary) => this.labels().get(row.column) ?? null,
            sortable: true,
          },
        ]
      : []),
    ...(this.mayEdit()
      ? [{ key: 'choose', label: 'Choose', value: (row: CharacteristicSummary) => (this.chosen().has(row.id) ? 'yes' : 'no') }]
      : []),
    { key: 'iv', label: 'IV', kind: 'number', decimals: 3, value: (row) => row.informationValue, sortable: true },
    {
      key: 'interval',
      label: 'IV from, to',
      unit: '95 % interval',
      kind: 'number',
      value: (row) => row.informationValueLower,
      format: (row) => intervalText(row.informationValueLower, row.informationValueUpper),
      sortable: true,
    },
    { key: 'reading', label: 'Reading', value: (row) => row.reading, sortable: true },
    { key: 'gini', label: 'Gini', kind: 'metric', value: (row) => row.gini, sortable: true },
    { key: 'missing', label: 'Missing', kind: 'share', value: (row) => row.missingShare, sortable: true },
    { key: 'bins', label: 'Bins', kind: 'count', value: (row) => row.bins, sortable: true },
    { key: 'trend', label: 'Risk', value: (row) => riskTrend[row.trend], sortable: true },
    {
      key: 'hold-out',
      label: 'CSI',
      unit: 'hold-out',
      kind: 'number',
      decimals: 3,
      value: (row) => row.stability.holdOut,
      sortable: true,
    },
    ...(this.opened()
      ? [
          {
            key: 'out-of-time',
            label: 'CSI',
            unit: 'out-of-time',
            kind: 'number' as const,
            decimals: 3,
            value: (row: CharacteristicSummary) => row.stability.outOfTime,
            sortable: true,
          },
        ]
      : []),
    ...(this.dated()
      ? [
          {
            key: 'by-month',
            label: 'WOE moves',
            unit: 'by month',
            kind: 'number' as const,
            decimals: 2,
            value: (row: CharacteristicSummary) => row.stability.byMonth,
            sortable: true,
          },
        ]
      : []),
    { key: 'group', label: 'Group', unit: 'says the same', kind: 'count', value: (row) => row.group, sortable: true },
    { key: 'edits', label: 'Edits', kind: 'count', value: (row) => row.edits, sortable: true },
    { key: 'warnings', label: 'To look at', value: (row) => warningsOf(row), sortable: true },
    {
      key: 'state',
      label: 'In fits',
      value: (row) => (row.included ? 'included' : `left out: ${row.leftOutReason}`),
      sortable: true,
      width: 36,
    },
  ]);
  private readonly typed = new Subject<string>();

  constructor() {
    this.typed.pipe(debounceTime(250), takeUntilDestroyed()).subscribe((search) => this.go({ search: search.trim() || null }));
    this.runs.finished
      .pipe(
        filter(
          (run) =>
            ['binning.class', 'binning.complete', 'binning.correlate', 'binning.reclass'].includes(run.kind) &&
            run.entityId === this.binningId(),
        ),
        takeUntilDestroyed(),
      )
      .subscribe((run) => {
        if (run.id === this.reclassingId() && run.state === 'succeeded') this.reclassingId.set(null);
        this.reload();
      });
  }

  protected readonly identify = (row: CharacteristicSummary): string => row.id;
  protected readonly leftOut = (row: CharacteristicSummary): boolean => !row.included;

  protected reload(): void {
    this.binning.reload();
    this.list.reload();
  }

  protected type(event: Event): void {
    this.typed.next((event.target as HTMLInputElement).value);
  }

  protected go(queryParams: Record<string, string | null>): void {
    void this.router.navigate([], { queryParams, queryParamsHandling: 'merge', replaceUrl: true });
  }

  protected choose(id: string, chosen: boolean): void {
    const next = new Set(this.chosen());
    if (chosen) next.add(id);
    else next.delete(id);
    this.chosen.set(next);
  }

  protected chooseAll(chosen: boolean): void {
    this.chosen.set(chosen ? new Set(this.rows().map(({ id }) => id)) : new Set());
  }

  protected async leaveOut(): Promise<void> {
    const picked = this.picked().filter(({ included }) => included);
    const answer = await this.asking.for({
      title: `Leave ${picked.length === 1 ? picked[0].column : plural(picked.length, 'characteristic')} out?`,
      text: 'It stays classed and can be taken in again. Fits started from now on do not have it.',
      accept: 'Leave out',
      reason: {
        label: 'Why',
        required: true,
        text: true,
        choices: ['Tells nobody apart', 'Not known at application', 'Data of poor quality', 'Same as another characteristic'],
      },
    });
    if (answer)
      await this.change(() =>
        this.binnings.setInclusion(this.binningId(), {
          characteristics: references(picked),
          included: false,
          reason: answer.reason,
        }),
      );
  }

  protected async takeIn(): Promise<void> {
    const picked = this.picked().filter(({ included }) => !included);
    await this.change(() =>
      this.binnings.setInclusion(this.binningId(), { characteristics: references(picked), included: true }),
    );
  }

  protected async reclass(): Promise<void> {
    const picked = this.picked();
    const [{ MatDialog }, { ReclassDialog }] = await Promise.all([
      import('@angular/material/dialog'),
      import('../ui/reclass-dialog'),
    ]);
    const data: ReclassQuestion = {
      columns: picked.map(({ column }) => column),
      constraints: this.binning.hasValue() ? this.binning.value().constraints : usualConstraints,
      edits: picked.reduce((sum, { edits }) => sum + edits, 0),
    };
    const reference = this.injector
      .get(MatDialog)
      .open<InstanceType<typeof ReclassDialog>, ReclassQuestion, ReclassAnswer>(ReclassDialog, { data, width: '600px' });
    const answer = await firstValueFrom(reference.afterClosed());
    if (!answer) return;
    const { fineClasses: _fineClasses, ...constraints } = answer.constraints;
    const asked = { characteristics: references(picked), constraints, reason: answer.reason };
    if (picked.length <= mostReclassedAtOnce) await this.change(() => this.binnings.reclass(this.binningId(), asked));
    else
      await this.changing.run(async () => {
        const { runId } = await this.binnings.startReclassing(this.binningId(), asked, newIdempotencyKey());
        this.reclassingId.set(runId);
        this.chosen.set(new Set());
      });
  }

  protected async startAgain(): Promise<void> {
    if (!this.binning.hasValue()) return;
    const { definitionId, name, constraints, from } = this.binning.value();
    const started = await this.starting.run(() =>
      this.binnings.start(this.modelId(), { definitionId, name, constraints, fromBinningId: from?.id ?? null }, this.key),
    );
    if (!started) return;
    this.key = newIdempotencyKey();
    await this.router.navigate(['/models', this.modelId(), 'binning', started.id]);
  }

  protected async openOutOfTime(reason: string): Promise<void> {
    if (!this.binning.hasValue()) return;
    const { definitionId } = this.binning.value();
    await this.changing.run(async () => {
      await this.binnings.openOutOfTime(definitionId, reason);
      this.reload();
    });
  }

  private async change(work: () => Promise<CharacteristicList>): Promise<void> {
    await this.changing.run(async () => {
      this.list.set(await work());
      this.chosen.set(new Set());
      this.binning.reload();
      await this.current.reload();
    });
    // Somebody else was faster: the list as it is now lies under the message.
    if (this.changing.error()) this.list.reload();
  }
}

const references = (list: readonly CharacteristicSummary[]): { id: string; revision: number }[] =>
  list.map(({ id, revision }) => ({ id, revision }));
