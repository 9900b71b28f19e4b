import { NgTemplateOutlet } from '@angular/common';
import { ChangeDetectionStrategy, Component, ElementRef, computed, effect, inject, input, signal, untracked } from '@angular/core';
import { toSignal } from '@angular/core/rxjs-interop';
import { ReactiveFormsModule } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatRadioModule } from '@angular/material/radio';
import { MatSelectModule } from '@angular/material/select';
import { Router, RouterLink } from '@angular/router';
import type { ScoreBand, Scorecard } from '@tallystone/contracts/scorecards/schema';
import { CurrentModel } from '../../../core/current-model';
import { Runs, hasEnded } from '../../../core/events/runs';
import { type Tagged, isStale, newIdempotencyKey } from '../../../core/http/etag';
import { Task } from '../../../core/task';
import { warnBeforeUnload } from '../../../core/unsaved-changes';
import { Ask } from '../../../ui/ask';
import { type Column } from '../../../ui/column';
import { DecisionNotice } from '../../../ui/decision-notice';
import { DenseTable } from '../../../ui/dense-table';
import { EmptyState } from '../../../ui/empty-state';
import { significant } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { partitionName } from '../../../ui/partition-mark';
import { ProblemList } from '../../../ui/problem-list';
import { RunProgress } from '../../../ui/run-progress';
import { showInvalid } from '../../../ui/show-invalid';
import { Tombstone } from '../../../ui/tombstone';
import { Scorecards } from '../data/scorecards';
import { ApplicantForm } from './applicant-form';
import { PointsList } from '../ui/points-list';
import { ScoreFigure } from '../ui/score-figure';
import {
  badRateOf,
  bandLabel,
  decisionWords,
  freezeWords,
  isCounted,
  pointsUnder,
  roundingWords,
  scaleReadings,
  scorecardDecision,
  scorecardFinding,
} from '../ui/scorecard-view';
import { fillSettings, holdToBands, settingsForm, settingsOf, textKey } from '../ui/settings-form';

/** The scorecard of a fit at its chosen penalty: scale, points, bands, cut-off, reasons, one applicant, and freezing. Which fit is in the URL. */
@Component({
  selector: 'ts-scorecard-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [
    NgTemplateOutlet,
    MatButtonModule,
    MatFormFieldModule,
    MatInputModule,
    MatRadioModule,
    MatSelectModule,
    ReactiveFormsModule,
    RouterLink,
    ApplicantForm,
    DecisionNotice,
    DenseTable,
    EmptyState,
    PageHeader,
    PointsList,
    ProblemList,
    RunProgress,
    ScoreFigure,
    Tombstone,
  ],
  templateUrl: './scorecard-page.html',
  styleUrl: './scorecard-page.scss',
})
export class ScorecardPage {
  private readonly scorecards = inject(Scorecards);
  private readonly runs = inject(Runs);
  private readonly ask = inject(Ask);
  private readonly router = inject(Router);
  private readonly current = inject(CurrentModel);
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef);

  readonly modelId = input.required<string>();
  /** From the URL: which fit. */
  readonly fit = input<string | undefined>(undefined);

  protected readonly list = this.scorecards.fits(() => this.modelId());
  protected readonly available = computed(() =>
    this.list.hasValue() ? this.list.value().fits.filter((fit) => fit.state === 'ready' && fit.choice !== null) : null,
  );
  protected readonly fitId = computed(() => this.fit() ?? this.available()?.[0]?.id ?? null);

  private readonly tagged = signal<Tagged<Scorecard> | null>(null);
  protected readonly problem = signal<unknown>(null);
  /** What somebody else saved first, kept until a person says which stays. */
  protected readonly theirs = signal<Tagged<Scorecard> | null>(null);
  protected readonly saving = new Task();
  protected readonly freezing = new Task();
  private readonly runId = signal<string | null>(null);
  protected readonly run = this.runs.run(() => this.runId());

  protected readonly form = settingsForm();
  protected readonly textKey = textKey;
  private readonly changed = toSignal(this.form.valueChanges);
  protected readonly scorecard = computed(() => this.tagged()?.value ?? null);
  protected readonly mayEdit = computed(() => this.scorecard()?.abilities.includes('edit') ?? false);
  protected readonly mayFreeze = computed(() => this.scorecard()?.abilities.includes('freeze') ?? false);
  readonly unsaved = computed(() => {
    this.changed();
    return this.form.dirty;
  });
  /** The settings as they stand in the form; null while something in it is not right. */
  protected readonly settings = computed(() => {
    this.changed();
    const scorecard = this.scorecard();
    return scorecard ? settingsOf(this.form, scorecard.settings) : null;
  });
  protected readonly shown = computed(() => this.settings() ?? this.scorecard()?.settings ?? null);
  protected readonly cutOff = computed(() => (this.settings() ?? this.scorecard()?.settings)?.cutOff ?? null);
  protected readonly bandsBy = computed(() => {
    this.changed();
    return this.form.controls.bandsBy.value;
  });

  protected readonly finding = computed(() => mapped(this.scorecard(), scorecardFinding));
  protected readonly decision = computed(() => mapped(this.scorecard(), scorecardDecision));
  protected readonly decisionText = computed(() => mapped(this.scorecard(), decisionWords));
  /** With what is counted on rows, while they are there. */
  protected readonly counted = computed(() => mapped(this.scorecard(), (scorecard) => (isCounted(scorecard) ? scorecard : null)));
  protected readonly rounding = computed(() => mapped(this.counted(), roundingWords));
  protected readonly blocks = computed(() => {
    const scorecard = this.scorecard();
    const shown = this.shown();
    // What can decide most stands first.
    return scorecard && shown ? pointsUnder(scorecard, shown.scaling).sort((a, b) => b.range - a.range) : [];
  });
  protected readonly readings = computed(() => mapped(this.shown(), ({ scaling }) => scaleReadings(scaling)) ?? []);
  protected readonly chosen = computed(() =>
    mapped(this.scorecard(), ({ choice }) => `penalty ${significant(choice.lambda, 2)}, ${choice.rule === 'by hand' ? 'by hand' : `${choice.rule} rule`}`),
  );

  protected readonly bandColumns = computed<Column<ScoreBand>[]>(() => {
    const partitions = (['development', 'holdOut', 'outOfTime'] as const).filter(
      (partition) => partition !== 'outOfTime' || this.scorecard()?.outOfTimeState === 'opened',
    );
    return [
      { key: 'band', label: 'Band', value: bandLabel },
      ...partitions.flatMap((partition): Column<ScoreBand>[] => [
        { key: `${partition}-rows`, label: 'Rows', unit: partitionName(partition), kind: 'count', value: (band) => band[partition]?.rows },
        { key: `${partition}-bads`, label: 'Bads', unit: partitionName(partition), kind: 'count', value: (band) => band[partition]?.bads },
        { key: `${partition}-rate`, label: 'Bad rate', unit: partitionName(partition), kind: 'share', value: (band) => badRateOf(band[partition]) },
      ]),
    ];
  });
  protected readonly bandRows = computed(() => this.scorecard()?.bands ?? []);
  protected readonly byBand = (band: ScoreBand): string => bandLabel(band);

  protected readonly freezingNow = computed(() => {
    const run = this.run();
    return this.freezing.busy() || (run !== null && !hasEnded(run));
  });

  constructor() {
    effect(() => {
      const id = this.fitId();
      if (id !== null) untracked(() => void this.read(id));
    });
    effect(() => {
      const run = this.run();
      if (run?.state === 'succeeded') untracked(() => void this.frozen(run.result));
    });
    this.form.controls.bandsBy.valueChanges.subscribe(() => holdToBands(this.form));
    warnBeforeUnload(() => this.unsaved());
  }

  protected choose(fitId: string): void {
    void this.router.navigate([], { queryParams: { fit: fitId } });
  }

  protected move(cutOff: number): void {
    this.form.controls.cutOff.setValue(cutOff);
    this.form.markAsDirty();
  }

  protected async save(): Promise<boolean> {
    const state = this.tagged();
    if (!state) return false;
    const settings = settingsOf(this.form, state.value.settings);
    if (!settings) {
      showInvalid(this.form, this.element.nativeElement);
      return false;
    }
    const fitId = state.value.fitId;
    const saved = await this.saving.run(() => this.scorecards.save(fitId, settings, state.etag));
    if (saved) {
      this.take(saved);
      await this.current.reload();
      return true;
    }
    if (isStale(this.saving.error())) {
      this.saving.clear();
      this.theirs.set(await this.scorecards.read(fitId));
    }
    return false;
  }

  protected takeTheirs(): void {
    const theirs = this.theirs();
    if (theirs) this.take(theirs);
  }

  protected async keepMine(): Promise<void> {
    const theirs = this.theirs();
    if (!theirs) return;
    this.tagged.set(theirs);
    this.theirs.set(null);
    await this.save();
  }

  protected undo(): void {
    const state = this.tagged();
    if (state) this.take(state);
  }

  protected async freeze(): Promise<void> {
    const scorecard = this.scorecard();
    if (!scorecard || (this.unsaved() && !(await this.save()))) return;
    const answer = await this.ask.for({
      title: 'Freeze this scorecard?',
      text: freezeWords(this.scorecard() ?? scorecard),
      accept: 'Freeze',
      reason: { label: 'Note: what this version is for', required: false },
    });
    if (!answer) return;
    const key = newIdempotencyKey();
    const run = await this.freezing.run(() => this.scorecards.freeze(this.modelId(), scorecard.fitId, answer.reason ?? '', key));
    if (!run) return;
    this.runs.follow(run);
    this.runId.set(run.id);
  }

  protected retry(): void {
    const id = this.fitId();
    if (id !== null) void this.read(id);
  }

  private async read(fitId: string): Promise<void> {
    this.problem.set(null);
    this.theirs.set(null);
    if (this.scorecard()?.fitId !== fitId) this.tagged.set(null);
    try {
      const read = await this.scorecards.read(fitId);
      if (this.fitId() === fitId) this.take(read);
    } catch (error) {
      this.problem.set(error);
    }
  }

  private take(state: Tagged<Scorecard>): void {
    this.tagged.set(state);
    this.theirs.set(null);
    this.form.enable({ emitEvent: false });
    fillSettings(
      this.form,
      state.value.settings,
      state.value.characteristics.map(({ column }) => column),
    );
    if (!state.value.abilities.includes('edit')) this.form.disable();
  }

  private async frozen(result: unknown): Promise<void> {
    const { versionId } = result as { versionId: string };
    await this.current.reload();
    await this.router.navigate(['/models', this.modelId(), 'version', versionId]);
  }
}

const mapped = <T, R>(value: T | null, to: (value: T) => R): R | null => (value === null ? null : to(value));
