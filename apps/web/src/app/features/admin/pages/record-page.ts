import { ChangeDetectionStrategy, Component, computed, effect, inject, input, signal } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { Router } from '@angular/router';
import { Runs } from '../../../core/events/runs';
import { Session } from '../../../core/session';
import { Task } from '../../../core/task';
import { EmptyState } from '../../../ui/empty-state';
import { CountPipe, MomentPipe } from '../../../ui/number-pipes';
import { count, plural } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { RunProgress } from '../../../ui/run-progress';
import { StatusMark } from '../../../ui/status-mark';
import { type RecordFilter, RecordOfActions, type RecordVerification, recordHead, recordPage } from '../data/record';
import { actionWords, changedFields, notedFields, saysWhatChanged } from '../ui/entry-words';

const narrowings = ['action', 'entity', 'entityId', 'modelId', 'actorId'] as const;
type Narrowing = (typeof narrowings)[number];

const narrowingWords: Readonly<Record<Narrowing, string>> = {
  action: 'Act',
  entity: 'Kind of thing',
  entityId: 'One thing',
  modelId: 'One model',
  actorId: 'One person',
};

/**
 * Who did what, when, in which role, and why: append-only and chained by hash. Filters and the page stand in the address; what an entry
 * shows can itself become a filter.
 */
@Component({
  selector: 'ts-record-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [
    MatButtonModule,
    MatFormFieldModule,
    MatInputModule,
    CountPipe,
    EmptyState,
    MomentPipe,
    PageHeader,
    ProblemList,
    RunProgress,
    StatusMark,
  ],
  host: { class: 'ts-page' },
  templateUrl: './record-page.html',
  styleUrl: './record-page.scss',
})
export class RecordPage {
  private readonly router = inject(Router);
  private readonly session = inject(Session);
  private readonly service = inject(RecordOfActions);
  private readonly runs = inject(Runs);

  readonly action = input<string>();
  readonly entity = input<string>();
  readonly entityId = input<string>();
  readonly modelId = input<string>();
  readonly actorId = input<string>();
  readonly from = input<string>();
  readonly to = input<string>();
  readonly before = input<string>();

  private readonly filter = computed<RecordFilter>(() => ({
    action: this.action(),
    entity: this.entity(),
    entityId: this.entityId(),
    modelId: this.modelId(),
    actorId: this.actorId(),
    from: this.from(),
    to: this.to(),
    before: this.before(),
  }));
  protected readonly page = recordPage(this.filter);
  protected readonly head = recordHead(() => this.mayVerify());
  protected readonly entries = computed(() => (this.page.hasValue() ? this.page.value().entries : null));
  protected readonly next = computed(() => (this.page.hasValue() ? this.page.value().next : null));
  protected readonly narrowed = computed(() =>
    narrowings
      .filter((key) => this.filter()[key])
      .map((key) => ({ key, words: narrowingWords[key], value: this.nameOf(key, this.filter()[key] ?? '') })),
  );
  protected readonly filtered = computed(() => this.narrowed().length > 0 || Boolean(this.from() || this.to()));
  protected readonly finding = computed(() => {
    const entries = this.entries();
    if (!entries) return null;
    const head = this.head.hasValue() ? this.head.value() : null;
    const shown = plural(entries.length, 'entry', 'entries');
    if (entries.length === 0) return this.filtered() ? 'No entry fits this filter.' : 'Nothing has been recorded yet.';
    const span = `${shown} shown, ${count(entries.at(-1)?.sequence)} to ${count(entries[0].sequence)}`;
    return head ? `${span} of ${count(head.sequence)}.` : `${span}.`;
  });

  protected readonly mayVerify = computed(() => this.session.can('record.verify'));
  protected readonly verifying = new Task();
  private readonly verificationId = signal<string | null>(null);
  protected readonly verification = this.runs.run(this.verificationId);
  protected readonly verified = computed(() => {
    const run = this.verification();
    return run?.state === 'succeeded' ? (run.result as RecordVerification) : null;
  });

  protected readonly actionWords = actionWords;
  protected readonly changedFields = changedFields;
  protected readonly notedFields = notedFields;
  protected readonly saysWhatChanged = saysWhatChanged;

  constructor() {
    // A verification is itself recorded: read the page and the head again.
    effect(() => {
      if (this.verified()) {
        this.page.reload();
        this.head.reload();
      }
    });
  }

  protected verify(): void {
    void this.verifying.run(async () => {
      const run = await this.service.verify();
      this.runs.follow(run);
      this.verificationId.set(run.id);
    });
  }

  protected narrow(queryParams: Partial<Record<keyof RecordFilter, string | null>>): void {
    void this.router.navigate([], { queryParams: { before: null, ...queryParams }, queryParamsHandling: 'merge' });
  }

  protected widen(key: Narrowing): void {
    this.narrow({ [key]: null });
  }

  protected clear(): void {
    void this.router.navigate([], { queryParams: {} });
  }

  protected dayChosen(key: 'from' | 'to', event: Event): void {
    this.narrow({ [key]: (event.target as HTMLInputElement).value || null });
  }

  protected older(): void {
    const next = this.next();
    if (next !== null) {
      void this.router.navigate([], { queryParams: { before: String(next) }, queryParamsHandling: 'merge' });
    }
  }

  /** A person's id in the address reads as their name where an entry on the page knows it. */
  private nameOf(key: Narrowing, value: string): string {
    if (key === 'action') return actionWords(value);
    if (key === 'actorId') return this.entries()?.find((entry) => entry.actorId === value)?.actorName ?? value;
    return value;
  }
}
