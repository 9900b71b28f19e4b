import { ChangeDetectionStrategy, Component, Injector, computed, effect, inject, input, signal, untracked } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import type { ProtectedColumn } from '@tallystone/contracts/permissions/schema';
import { comparedWords } from '@tallystone/contracts/samples/balance-reading';
import type { ColumnRole } from '@tallystone/contracts/samples/columns';
import type { DraftContent } from '@tallystone/contracts/samples/definition';
import { withColumns } from '@tallystone/contracts/samples/role-holders';
import { filter } from 'rxjs';
import { CurrentModel } from '../../../core/current-model';
import { type Run, Runs, hasEnded } from '../../../core/events/runs';
import { newIdempotencyKey } from '../../../core/http/etag';
import { Problem } from '../../../core/http/problem';
import { Task } from '../../../core/task';
import { warnBeforeUnload } from '../../../core/unsaved-changes';
import { Ask } from '../../../ui/ask';
import { DecisionNotice } from '../../../ui/decision-notice';
import { moment, plural } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { RunProgress } from '../../../ui/run-progress';
import { Tombstone } from '../../../ui/tombstone';
import { DraftStore } from '../data/draft-store';
import {
  type ColumnProfile,
  Samples,
  balanceOf,
  columnsOf,
  definitionsOf,
  draftBalanceOf,
  oneSample,
  protectedOf,
  unreadOf,
} from '../data/samples';
import { BalanceTable } from '../ui/balance-table';
import { DraftBalance } from '../ui/draft-balance';
import { ExclusionList } from '../ui/exclusion-list';
import { countsFinding } from '../ui/findings';
import { NotReadYet } from '../ui/not-read-yet';
import { OutcomeEditor } from '../ui/outcome-editor';
import { PartitionEditor } from '../ui/partition-editor';
import { PartitionTable } from '../ui/partition-table';
import { ProtectedList } from '../ui/protected-list';
import { runTitles } from '../ui/run-titles';
import { SampleSteps } from '../ui/sample-steps';
import { SaveStateNote } from '../ui/save-state';
import { SensitivityTable } from '../ui/sensitivity-table';
import { StaleNotice } from '../ui/stale-notice';
import { WaterfallFigure } from '../ui/waterfall-figure';
import { asksWhenStale } from './stale-draft';

/** What the sample means: outcome, exclusions, partition, and the waterfall that they give; then confirmed for good. */
@Component({
  selector: 'ts-definition-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { class: 'ts-page' },
  imports: [
    RouterLink,
    MatButtonModule,
    BalanceTable,
    DecisionNotice,
    DraftBalance,
    ExclusionList,
    NotReadYet,
    OutcomeEditor,
    PageHeader,
    PartitionEditor,
    PartitionTable,
    ProblemList,
    ProtectedList,
    RunProgress,
    SampleSteps,
    SaveStateNote,
    SensitivityTable,
    StaleNotice,
    Tombstone,
    WaterfallFigure,
  ],
  templateUrl: './definition-page.html',
  styles: `
    section {
      display: grid;
      gap: 14px;
      grid-template-columns: minmax(0, 1fr);
    }
  `,
})
export class DefinitionPage {
  private readonly samples = inject(Samples);
  private readonly runs = inject(Runs);
  private readonly current = inject(CurrentModel);
  private readonly asking = inject(Ask);
  private readonly injector = inject(Injector);
  protected readonly draft = inject(DraftStore);
  protected readonly settle = asksWhenStale(this.draft);

  readonly modelId = input.required<string>();
  readonly sampleId = input.required<string>();

  private readonly model = () => this.modelId();
  private readonly id = () => this.sampleId();
  protected readonly sample = oneSample(this.model, this.id);
  /** Null while it is asked for, and where it cannot be read: the resource's own value throws then. */
  protected readonly sampleValue = computed(() => (this.sample.hasValue() ? this.sample.value() : null));
  protected readonly unread = unreadOf(this.sample);
  protected readonly columns = columnsOf(this.model, this.id);
  protected readonly definitions = definitionsOf(this.model, this.id);
  protected readonly confirming = new Task();
  protected readonly changing = signal(false);
  protected readonly moment = moment;
  protected readonly comparedWords = comparedWords;
  private readonly runId = signal<string | null>(null);
  protected readonly run = this.runs.run(() => this.runId() ?? (this.sample.hasValue() ? this.sample.value().runId : null));
  protected readonly runTitle = computed(() => runTitles[this.run()?.kind ?? ''] ?? 'The run');
  readonly unsaved = this.draft.unsaved;

  /** Before that there is no draft to ask for. */
  private readonly isRead = computed(() => this.sample.hasValue() && this.unread() === null);
  protected readonly editable = computed(() => this.sample.hasValue() && this.sample.value().abilities.includes('define'));
  protected readonly profiles = computed(() => (this.columns.hasValue() ? this.columns.value().columns : []));
  protected readonly latest = computed(() =>
    this.definitions.hasValue() ? (this.definitions.value().definitions[0] ?? null) : null,
  );
  /** Shown instead of the draft until somebody works on another definition. */
  protected readonly confirmed = computed(() => (this.changing() ? null : this.latest()));
  protected readonly balance = balanceOf(this.model, this.id, () => this.confirmed()?.id ?? null);
  protected readonly draftBalance = draftBalanceOf(this.model, this.id, () => !this.confirmed() && this.draft.content() !== null);
  protected readonly protection = protectedOf(() => this.confirmed()?.id ?? null);
  protected readonly withdrawing = new Task();
  protected readonly weight = computed(() => this.draft.content()?.columns.find(({ role }) => role === 'weight')?.column ?? null);
  protected readonly problems = computed(() => {
    const counted = this.draft.check()?.problems ?? [];
    const list = this.draft.problems().length > 0 ? this.draft.problems() : counted;
    return list.length === 0
      ? null
      : new Problem(422, 'draft', `${plural(list.length, 'thing')} to settle before this can be confirmed`, '', list);
  });
  protected readonly ready = computed(() => {
    const run = this.run();
    const busy = this.confirming.busy() || (run !== null && !hasEnded(run));
    return !busy && this.draft.saveState() === 'saved' && this.draft.check()?.counts != null;
  });
  protected readonly finding = computed(() => {
    if (this.unread()) return null;
    const counts = this.draft.check()?.counts ?? (this.changing() ? null : this.latest()?.counts);
    if (counts) return countsFinding(counts);
    const problems = this.draft.problems().length;
    return problems > 0
      ? `${plural(problems, 'thing')} to settle before this can be confirmed.`
      : 'Say what is good and bad, who is left out, and how the sample is split.';
  });

  constructor() {
    warnBeforeUnload(() => this.draft.unsaved());
    effect(() => {
      const [modelId, sampleId] = [this.modelId(), this.sampleId()];
      if (this.isRead()) untracked(() => void this.draft.open(modelId, sampleId));
    });
    // Counts by itself once everything that the columns can tell is settled.
    effect(() => {
      const wanted = this.editable() && (this.latest() === null || this.changing());
      const settled = this.draft.saveState() === 'saved' && this.draft.content() !== null && this.draft.problems().length === 0;
      // A count that was overtaken by a change ends without a result, and the next one starts then.
      const idle = !this.draft.checking() && this.draft.error() === null;
      if (wanted && settled && idle && this.draft.check() === null) untracked(() => void this.draft.count());
    });
    this.runs.finished
      .pipe(
        filter(({ entity, entityId }) => entity === 'sample' && entityId === this.sampleId()),
        takeUntilDestroyed(),
      )
      .subscribe((run) => {
        this.definitions.reload();
        this.sample.reload();
        if (run.kind === 'sample.read') this.columns.reload();
        this.draftBalance.reload();
        if (run.kind === 'sample.confirm' && run.state === 'succeeded') this.changing.set(false);
        void this.current.reload();
      });
  }

  protected holder(role: ColumnRole): ColumnProfile | null {
    const column = this.draft.content()?.columns.find((entry) => entry.role === role)?.column;
    return this.profiles().find((profile) => profile.column === column) ?? null;
  }

  protected patch(change: Partial<DraftContent>): void {
    this.draft.change((content) => ({ ...content, ...change }));
  }

  /** The outcome moves to another column; the one that had it is not used until someone gives it a role. */
  protected setOutcomeColumn(column: string): void {
    this.draft.change((content) => {
      const moved = withColumns(
        content,
        content.columns.map((entry) => {
          if (entry.column === column) return { ...entry, role: 'outcome' };
          return entry.role === 'outcome' ? { ...entry, role: 'not used', reason: 'Another column is the outcome.' } : entry;
        }),
      );
      // The column is chosen under its rule, which stays in sight.
      const { rule } = content.outcome;
      return rule ? { ...moved, outcome: { ...moved.outcome, rule } } : moved;
    });
  }

  /** Months on book are known only after the decision: as part of the outcome the column is no characteristic any more. */
  protected setOutcome(outcome: DraftContent['outcome']): void {
    const months = outcome.rule?.monthsOnBook?.column;
    this.draft.change((content) => ({
      ...content,
      outcome,
      columns: content.columns.map((entry) =>
        entry.column === months && entry.role === 'characteristic'
          ? { ...entry, role: 'not used', reason: 'Months on book: part of the outcome.' }
          : entry,
      ),
    }));
  }

  /** The dialog's code is loaded when somebody first permits something. */
  protected async permit(column: ProtectedColumn): Promise<void> {
    const definitionId = this.confirmed()?.id;
    if (definitionId === undefined) return;
    const [{ MatDialog }, { PermitDialog }] = await Promise.all([import('@angular/material/dialog'), import('../ui/permit-dialog')]);
    const permit = async (citation: string, reason: string): Promise<void> => {
      this.protection.set(await this.samples.actOnProtected(definitionId, { act: 'permitted', column: column.column, citation, reason }));
    };
    this.injector.get(MatDialog).open(PermitDialog, { data: { column, permit }, width: '560px' });
  }

  protected async withdraw({ column }: ProtectedColumn): Promise<void> {
    const definitionId = this.confirmed()?.id;
    if (definitionId === undefined) return;
    const answer = await this.asking.for({
      title: `Withdraw the permission of ${column}?`,
      text: 'It is barred again from every binning and fit of this definition, and nothing that took it in can be frozen.',
      accept: 'Withdraw',
      reason: { label: 'Why it is withdrawn', required: true, hint: 'A sentence, of ten characters at least' },
    });
    if (!answer) return;
    await this.withdrawing.run(async () => {
      this.protection.set(await this.samples.actOnProtected(definitionId, { act: 'withdrawn', column, reason: answer.reason }));
    });
  }

  protected confirm(): Promise<void> {
    return this.startRun((revision, key) => this.samples.confirm(this.modelId(), this.sampleId(), revision, key));
  }

  protected compare(): Promise<void> {
    return this.startRun((revision, key) => this.samples.compare(this.modelId(), this.sampleId(), revision, key));
  }

  /** Starts a run on the draft as it is now, and follows it. */
  private async startRun(start: (revision: number, key: string) => Promise<Run>): Promise<void> {
    await this.draft.flush();
    const revision = this.draft.revision();
    if (revision === null) return;
    const run = await this.confirming.run(() => start(revision, newIdempotencyKey()));
    if (!run) return;
    this.runs.follow(run);
    this.runId.set(run.id);
  }
}
