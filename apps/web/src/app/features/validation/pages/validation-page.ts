import { ChangeDetectionStrategy, Component, computed, effect, inject, input, linkedSignal, signal, untracked } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule, Validators } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MatButtonToggleModule } from '@angular/material/button-toggle';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { RouterLink } from '@angular/router';
import type { EvidenceSummary, PartitionAuc, ReplicationMethod } from '@tallystone/contracts/validation/schema';
import { CurrentModel } from '../../../core/current-model';
import { type Run, Runs, hasEnded } from '../../../core/events/runs';
import { newIdempotencyKey } from '../../../core/http/etag';
import { Task } from '../../../core/task';
import { type Column } from '../../../ui/column';
import { DecisionNotice } from '../../../ui/decision-notice';
import { DenseTable } from '../../../ui/dense-table';
import { EmptyState } from '../../../ui/empty-state';
import { moment } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { RunProgress } from '../../../ui/run-progress';
import { Tombstone } from '../../../ui/tombstone';
import { Versions } from '../data/versions';
import { AucFigure, measures } from '../ui/auc-figure';
import { ChallengeTable } from '../ui/challenge-table';
import { HalvesFigure } from '../ui/halves-figure';
import { StabilityFigure } from '../ui/stability-figure';
import { latestByMethod, methodName, nextTest, validationFinding } from '../ui/validation-view';

/** The tests of one version: replication as the two halves, performance by partition, stability over resamples, and the evidence. */
@Component({
  selector: 'ts-validation-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [
    MatButtonModule,
    MatButtonToggleModule,
    MatFormFieldModule,
    MatInputModule,
    ReactiveFormsModule,
    RouterLink,
    AucFigure,
    ChallengeTable,
    DecisionNotice,
    DenseTable,
    EmptyState,
    HalvesFigure,
    PageHeader,
    ProblemList,
    RunProgress,
    StabilityFigure,
    Tombstone,
  ],
  templateUrl: './validation-page.html',
  styleUrl: './validation-page.scss',
})
export class ValidationPage {
  private readonly versions = inject(Versions);
  private readonly runs = inject(Runs);
  private readonly current = inject(CurrentModel);
  readonly modelId = input.required<string>();
  readonly versionId = input.required<string>();

  protected readonly resource = this.versions.validation(() => this.versionId());
  protected readonly work = computed(() => (this.resource.hasValue() ? this.resource.value() : null));
  private readonly versionResource = this.versions.one(() => this.versionId());
  protected readonly version = computed(() => (this.versionResource.hasValue() ? this.versionResource.value() : null));
  protected readonly evidence = this.versions.evidence(() => this.versionId());
  private readonly fit = this.versions.fit(() => this.version()?.fitId ?? null);
  private readonly cover = this.versions.cover(() => (this.fit.hasValue() ? this.fit.value().definitionId : null));
  protected readonly covered = computed(() => this.cover.hasValue() && this.cover.value().state === 'covered');

  protected readonly title = computed(() => {
    const version = this.version();
    return version ? `Validation of version ${version.number}` : 'Validation';
  });
  protected readonly finding = computed(() => {
    const work = this.work();
    return work ? validationFinding(work) : null;
  });
  protected readonly mayReplicate = computed(() => this.work()?.abilities.includes('replicate') ?? false);
  protected readonly mayStudy = computed(() => this.work()?.abilities.includes('study-stability') ?? false);
  protected readonly next = computed(() => {
    const work = this.work();
    const version = this.version();
    if (!work || !version || !this.mayReplicate()) return null;
    const test = nextTest(work);
    if (test !== null) return { words: test, conclude: false };
    return version.abilities.includes('conclude') ? { words: 'The tests of this page are there. Conclude when they have said what you need to know.', conclude: true } : null;
  });

  protected readonly replications = computed(() => {
    const all = this.work()?.replications ?? [];
    return [...all].sort((a, b) => b.evidenceNumber - a.evidenceNumber).map((entry) => ({ ...entry, words: `E-${entry.evidenceNumber}: ${methodName(entry.method)}` }));
  });
  /** What does not match goes first; else the newest. */
  protected readonly shownId = linkedSignal(() => {
    const latest = latestByMethod(this.work()?.replications ?? []);
    return (latest.find(({ matches }) => !matches) ?? this.replications()[0])?.evidenceId ?? null;
  });
  protected readonly shown = computed(() => this.replications().find(({ evidenceId }) => evidenceId === this.shownId()) ?? null);
  protected readonly byWords = computed(() => {
    const shown = this.shown();
    return shown ? `Evidence E-${shown.evidenceNumber}, ${methodName(shown.method)}, by ${shown.by}, ${moment(shown.at)}, code ${shown.codeVersion}.` : '';
  });
  protected readonly study = computed(() => [...(this.work()?.stability ?? [])].sort((a, b) => b.evidenceNumber - a.evidenceNumber)[0] ?? null);

  protected readonly measures = measures;
  protected readonly byPartition = (row: PartitionAuc): string => row.partition;
  protected readonly evidenceColumns: readonly Column<EvidenceSummary>[] = [
    { key: 'number', label: 'Evidence', value: (row) => row.number, format: (row) => `E-${row.number}` },
    { key: 'kind', label: 'Kind', value: (row) => row.kind },
    { key: 'title', label: 'What', value: (row) => row.title, width: 48 },
    { key: 'sha', label: 'SHA-256', unit: 'first 12', value: (row) => row.sha256, format: (row) => row.sha256.slice(0, 12) },
    { key: 'by', label: 'By', value: (row) => row.by },
    { key: 'at', label: 'Made', kind: 'moment', value: (row) => row.at },
  ];
  protected readonly evidenceRows = computed(() => (this.evidence.hasValue() ? this.evidence.value().evidence : []));
  protected readonly byId = (row: { readonly id: string }): string => row.id;

  protected readonly starting = new Task();
  private readonly startedId = signal<string | null>(null);
  private readonly runningId = computed(() => this.startedId() ?? this.work()?.runIds[0] ?? null);
  protected readonly run = this.runs.run(() => this.runningId());
  protected readonly runTitle = computed(() => (this.run()?.kind === 'version.stability' ? 'Refitting over resamples' : 'Replicating from the raw file'));
  protected readonly busy = computed(() => {
    const run = this.run();
    return this.starting.busy() || (run !== null && !hasEnded(run));
  });
  protected readonly sizes = new FormGroup({
    resamples: new FormControl(200, { nonNullable: true, validators: [Validators.required, Validators.min(20), Validators.max(1000)] }),
    seed: new FormControl(1, { nonNullable: true, validators: [Validators.required, Validators.min(0), Validators.max(2147483647)] }),
  });

  constructor() {
    effect(() => {
      const run = this.run();
      if (run && hasEnded(run)) untracked(() => this.reload());
    });
  }

  protected async replicate(method: ReplicationMethod): Promise<void> {
    const key = newIdempotencyKey();
    this.follow(await this.starting.run(() => this.versions.replicate(this.versionId(), method, key)));
  }

  protected async studyStability(): Promise<void> {
    if (this.sizes.invalid) {
      this.sizes.markAllAsTouched();
      return;
    }
    const { resamples, seed } = this.sizes.getRawValue();
    const key = newIdempotencyKey();
    this.follow(await this.starting.run(() => this.versions.studyStability(this.versionId(), resamples, seed, key)));
  }

  protected reload(): void {
    this.resource.reload();
    this.evidence.reload();
    this.versionResource.reload();
    void this.current.reload();
  }

  private follow(run: Run | undefined): void {
    if (!run) return;
    this.runs.follow(run);
    this.startedId.set(run.id);
  }
}
