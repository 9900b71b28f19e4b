import { ChangeDetectionStrategy, Component, computed, effect, inject, input, signal, untracked } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { MatButtonModule } from '@angular/material/button';
import { Router } from '@angular/router';
import { filter } from 'rxjs';
import { CurrentModel } from '../../../core/current-model';
import { Runs } from '../../../core/events/runs';
import { newIdempotencyKey } from '../../../core/http/etag';
import { Problem } from '../../../core/http/problem';
import { Task } from '../../../core/task';
import { Ask } from '../../../ui/ask';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { RunProgress } from '../../../ui/run-progress';
import { Tombstone } from '../../../ui/tombstone';
import {
  type DoubtfulLines as FoundLines,
  type Preview,
  type ReadingChoices,
  Samples,
  doubtfulLinesOf,
  oneSample,
} from '../data/samples';
import { orderWords } from '../ui/date-orders';
import { DoubtfulLines, type Looked } from '../ui/doubtful-lines';
import { readingFinding } from '../ui/findings';
import { PreviewTable } from '../ui/preview-table';
import { ReadingForm } from '../ui/reading-form';
import { signWords } from '../ui/sign-words';
import { SampleSteps } from '../ui/sample-steps';

/** How the file is read: proposed with reasons, shown on its first rows with every doubt, confirmed by a person. */
@Component({
  selector: 'ts-reading-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { class: 'ts-page' },
  imports: [
    DoubtfulLines,
    MatButtonModule,
    PageHeader,
    PreviewTable,
    ProblemList,
    ReadingForm,
    RunProgress,
    SampleSteps,
    Tombstone,
  ],
  template: `
    <div class="ts-stack">
      <ts-sample-steps
        [modelId]="modelId()"
        [sampleId]="sampleId()"
        [fileName]="sampleValue()?.fileName ?? ''"
        [read]="isRead()"
      />
      <ts-page-header title="Reading choices" [finding]="finding()">
        @if (mayDiscard()) {
          <button matButton type="button" (click)="discard()">Discard the file</button>
        }
      </ts-page-header>
      @if (sampleValue()?.erased; as erased) {
        <ts-tombstone [erased]="erased">How the file was read stays; it cannot be looked at or read again.</ts-tombstone>
      }
      <ts-problems [error]="sample.error()" />
      <ts-problems [error]="looking.error()" next="Change the choices and look again." />
      <ts-problems [error]="starting.error()" />
      <ts-run-progress [run]="run()" title="Reading the file" />
      <ts-problems
        [error]="fileProblems()"
        next="Mend the file and bring it in again, or change the reading choices below."
        [limit]="60"
      />

      @if (preview(); as view) {
        @if (mayRead()) {
          <ts-reading-form [choices]="view.choices" [reasons]="view.reasons" [disabled]="busy()" (changed)="look($event)" />
          <div class="ts-actions">
            <button matButton="filled" type="button" [disabled]="busy() || view.problems.length > 0" (click)="read()">
              {{ sampleValue()?.state === 'ready' ? 'Read the file again' : 'Read the file' }}
            </button>
            @if (looking.busy()) {
              <span class="ts-second" role="status">Looking at the file</span>
            }
          </div>
        }
        <ts-problems [error]="found.error()" />
        @if (doubtful(); as those) {
          <ts-doubtful-lines [found]="those.found" [looked]="those.looked" />
        }
        <ts-preview-table [preview]="view" />
      } @else if (looking.busy()) {
        <p class="ts-second" role="status">Looking at the file</p>
      }
      @if (!mayRead() && sampleValue()?.reading; as reading) {
        <dl class="ts-pairs">
          <dt>Delimiter</dt>
          <dd>{{ signWords(reading.delimiter) }}</dd>
          <dt>Encoding</dt>
          <dd>{{ reading.encoding.toUpperCase() }}</dd>
          <dt>Decimal sign</dt>
          <dd>{{ signWords(reading.decimal) }}</dd>
          <dt>Thousands sign</dt>
          <dd>{{ signWords(reading.thousands) }}</dd>
          <dt>Date order</dt>
          <dd>{{ orderWords(reading.dateOrder) }}</dd>
          @if (reading.notDates; as columns) {
            <dt>No dates, whatever their form</dt>
            <dd>{{ columns.join(', ') }}</dd>
          }
          <dt>Missing</dt>
          <dd>{{ missingWords() }}</dd>
        </dl>
      }
    </div>
  `,
})
export class ReadingPage {
  private readonly samples = inject(Samples);
  private readonly runs = inject(Runs);
  private readonly router = inject(Router);
  private readonly current = inject(CurrentModel);
  private readonly ask = inject(Ask);

  readonly modelId = input.required<string>();
  readonly sampleId = input.required<string>();
  /** Tokens to enter as missing beside those that the file was read with. */
  readonly missing = input<string | string[]>();

  protected readonly sample = oneSample(
    () => this.modelId(),
    () => this.sampleId(),
  );
  /** Null while it is asked for, and where it cannot be read: the resource's own value throws then. */
  protected readonly sampleValue = computed(() => (this.sample.hasValue() ? this.sample.value() : null));
  protected readonly preview = signal<Preview | null>(null);
  protected readonly looking = new Task();
  protected readonly starting = new Task();
  private readonly runId = signal<string | null>(null);
  private readonly known = computed(() => this.runId() ?? (this.sample.hasValue() ? this.sample.value().runId : null));
  protected readonly run = this.runs.run(() => this.known());
  private chosen: Partial<ReadingChoices> = {};

  private readonly abilities = computed(() => (this.sample.hasValue() ? this.sample.value().abilities : []));
  protected readonly mayRead = computed(() => this.abilities().includes('read-file'));
  protected readonly mayDiscard = computed(() => this.abilities().includes('discard'));
  protected readonly underWay = computed(() => {
    const run = this.run();
    return run !== null && !['succeeded', 'failed', 'cancelled'].includes(run.state);
  });
  protected readonly busy = computed(() => this.underWay() || this.looking.busy() || this.starting.busy());
  protected readonly isRead = computed(() => this.sample.hasValue() && this.sample.value().rows !== null);
  protected readonly finding = computed(() => {
    const preview = this.preview();
    if (this.sample.hasValue() && this.sample.value().erased) return 'The rows of this file were erased.';
    if (preview) return readingFinding(preview);
    return this.sample.hasValue() && !this.mayRead() ? this.settledWords() : null;
  });
  private readonly lastProblems = computed(() =>
    this.sample.hasValue() && !this.underWay() ? this.sample.value().problems : [],
  );
  /** What the preview finds wrong with the file, else what the last reading found. */
  protected readonly fileProblems = computed(() => {
    const shown = this.preview()?.problems ?? [];
    const problems = shown.length > 0 ? shown : this.lastProblems();
    return problems.length === 0 ? null : new Problem(422, 'file', 'The file cannot be read like this', '', problems);
  });
  /** Changes when a reading begins and ends, so that its lines are asked for once it has ended. */
  private readonly refused = computed(() => this.mayRead() && this.lastProblems().length > 0);
  protected readonly found = doubtfulLinesOf(
    () => this.modelId(),
    () => this.sampleId(),
    () => this.refused(),
  );
  /** The lines of these problems. */
  protected readonly doubtful = computed<{ found: FoundLines; looked: Looked } | null>(() => {
    const preview = this.preview();
    if (preview && preview.problems.length > 0)
      return { found: preview.doubtful, looked: preview.looked.whole ? 'file' : 'part' };
    return this.found.hasValue() ? { found: this.found.value(), looked: 'reading' } : null;
  });
  protected readonly signWords = signWords;
  protected readonly orderWords = orderWords;
  private readonly settledWords = computed(() =>
    this.sample.hasValue() && this.sample.value().definitions > 0
      ? 'The file was read with these choices, and they stay: a confirmed definition rests on them.'
      : 'How the file is read is for the modellers of this model to say.',
  );
  protected readonly missingWords = computed(() => {
    const missing = this.sample.hasValue() ? (this.sample.value().reading?.missing ?? []) : [];
    return missing.map((token) => (token === '' ? 'empty' : token)).join(', ');
  });

  constructor() {
    // Looks once the sample is known: from what it was read with, else from what the file itself suggests.
    effect(() => {
      if (!this.sample.hasValue() || !this.mayRead()) return;
      const reading = this.sample.value().reading;
      untracked(() => {
        if (this.preview() === null && !this.looking.busy()) void this.look(this.withTokens(reading));
      });
    });
    this.runs.finished
      .pipe(
        filter(({ entity, entityId }) => entity === 'sample' && entityId === this.sampleId()),
        takeUntilDestroyed(),
      )
      .subscribe((run) => {
        this.sample.reload();
        void this.current.reload();
        if (run.state === 'succeeded' && run.kind === 'sample.read') {
          void this.router.navigate(['/models', this.modelId(), 'sample', this.sampleId(), 'columns']);
        }
      });
  }

  private withTokens(reading: ReadingChoices | null): Partial<ReadingChoices> {
    const tokens = [this.missing() ?? []].flat();
    if (reading === null || tokens.length === 0) return reading ?? {};
    return { ...reading, missing: [...new Set([...reading.missing, ...tokens])].slice(0, 50) };
  }

  protected async look(choices: Partial<ReadingChoices>): Promise<void> {
    // Which columns hold no dates follows from the file and the order: it is judged anew with each choice.
    const { notDates: _, ...chosen } = { ...this.chosen, ...choices };
    this.chosen = chosen;
    const preview = await this.looking.run(() => this.samples.preview(this.modelId(), this.sampleId(), this.chosen));
    if (preview) this.preview.set(preview);
  }

  protected async read(): Promise<void> {
    const preview = this.preview();
    if (!preview) return;
    if (this.sample.hasValue() && this.sample.value().state === 'ready') {
      const answer = await this.ask.for({
        title: 'Read the file again?',
        text: 'Columns and their quality are made anew under these choices. The draft of the definition stays as it is wherever its columns are still there and of the same kind; what cannot stay is told on the page of the columns. Definitions that were confirmed stay as they are.',
        accept: 'Read again',
      });
      if (!answer) return;
    }
    const run = await this.starting.run(() =>
      this.samples.read(this.modelId(), this.sampleId(), preview.choices, newIdempotencyKey()),
    );
    if (!run) return;
    this.runs.follow(run);
    this.runId.set(run.id);
    this.sample.reload();
  }

  protected async discard(): Promise<void> {
    const answer = await this.ask.for({
      title: 'Discard this file?',
      text: 'The stored file, its columns and its draft are removed. That it was here stays in the record.',
      accept: 'Discard',
      grave: true,
    });
    if (!answer) return;
    const done = await this.starting.run(() => this.samples.discard(this.modelId(), this.sampleId()).then(() => true));
    if (!done) return;
    await this.current.reload();
    await this.router.navigate(['/models', this.modelId(), 'sample']);
  }
}
