import { HttpClient } from '@angular/common/http';
import { DestroyRef, Injectable, type Signal, computed, effect, inject, signal } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import type { Run, RunEvent } from '@tallystone/contracts/runs/schema';
import {
  EMPTY,
  type Observable,
  Subject,
  catchError,
  concatMap,
  exhaustMap,
  filter,
  firstValueFrom,
  interval,
  switchMap,
} from 'rxjs';
import { Session } from '../session';
import { EventStream } from './event-stream';

export type { Run };

const pollEveryMs = 3000;

/** True once nothing more will happen to a run. */
export function hasEnded(run: Pick<Run, 'state'>): boolean {
  return run.state === 'succeeded' || run.state === 'failed' || run.state === 'cancelled';
}

/** How far a run was when this page first heard of it, by this page's own clock: the start of the estimate of the time left. */
interface FirstHeard {
  readonly attempt: number;
  readonly share: number;
  readonly at: number;
}

/**
 * The runs of this person that are under way, live: from the event stream, and by polling while the stream is broken. Pages read
 * `run(id)` or `forModel(modelId)` as signals; `finished` tells the data layer when to read again.
 *
 * @example
 * readonly fitting = this.runs.run(() => this.fit()?.runId);
 * constructor() { this.runs.finished.pipe(filter((run) => run.entityId === this.id()), takeUntilDestroyed()).subscribe(() => this.fit.reload()); }
 */
@Injectable({ providedIn: 'root' })
export class Runs {
  private readonly http = inject(HttpClient);
  private readonly stream = inject(EventStream);
  private readonly session = inject(Session);
  private readonly all = signal<ReadonlyMap<string, Run>>(new Map());
  private readonly heard = new Map<string, FirstHeard>();
  private readonly finishedRuns = new Subject<Run>();

  /** Runs that have just ended, once each, with their result. */
  readonly finished: Observable<Run> = this.finishedRuns.asObservable();
  readonly active = computed(() => [...this.all().values()].filter((run) => !hasEnded(run)));

  constructor() {
    const listening = new Subject<boolean>();
    const destroyed = inject(DestroyRef);
    listening
      .pipe(
        switchMap((on) => (on ? this.stream.of<RunEvent>('run').pipe(catchError(() => EMPTY)) : EMPTY)),
        concatMap((event) => this.hear(event)),
        takeUntilDestroyed(destroyed),
      )
      .subscribe();
    listening
      .pipe(
        switchMap((on) => (on ? interval(pollEveryMs) : EMPTY)),
        filter(() => this.stream.state() !== 'open'),
        exhaustMap(() => this.poll()),
        takeUntilDestroyed(destroyed),
      )
      .subscribe();
    const who = computed(() => this.session.person()?.id ?? null);
    effect(() => {
      const on = who() !== null;
      this.all.set(new Map());
      listening.next(on);
      if (on) void this.poll();
    });
  }

  /** One run, live; null until it is known. */
  run(id: () => string | null | undefined): Signal<Run | null> {
    return computed(() => {
      const wanted = id();
      return wanted ? (this.all().get(wanted) ?? null) : null;
    });
  }

  /** Runs of one model that this page has heard of, the newest first, optionally of one kind. */
  forModel(modelId: () => string | null, kind?: string): Signal<readonly Run[]> {
    return computed(() =>
      [...this.all().values()]
        .filter((run) => run.modelId === modelId() && (kind === undefined || run.kind === kind))
        .sort((a, b) => b.createdAt.localeCompare(a.createdAt)),
    );
  }

  /** Takes in a run that a request has just started, so that its progress shows at once. */
  follow(run: Run): void {
    this.take(run);
  }

  /** Asks the server to stop a run; resolves when the wish is recorded, the run ends a moment later. */
  async cancel(id: string): Promise<void> {
    this.take(await firstValueFrom(this.http.post<Run>(`/api/runs/${id}/cancel`, {})));
  }

  /** Seconds a run may still take at the pace seen so far; null until there is a pace. */
  secondsLeft(run: Run): number | null {
    const first = this.heard.get(run.id);
    if (!first || run.share === null || first.attempt !== run.attempt || run.share - first.share < 0.03) return null;
    const elapsed = (performance.now() - first.at) / 1000;
    return elapsed < 1.5 ? null : (elapsed * (1 - run.share)) / (run.share - first.share);
  }

  private async hear(event: RunEvent): Promise<void> {
    const known = this.all().get(event.runId);
    // A run that starts or ends is read whole: an event carries neither who started it nor its result.
    if (!known || hasEnded(event)) {
      const run = await this.read(event.runId);
      if (run) this.take(run, true);
      return;
    }
    const { state, phase, share, attempt, problem } = event;
    this.take({ ...known, state, phase, share, attempt, problem });
  }

  private async poll(): Promise<void> {
    try {
      const { runs } = await firstValueFrom(this.http.get<{ runs: Run[] }>('/api/runs', { params: { active: 'true' } }));
      const listed = new Set(runs.map((run) => run.id));
      for (const run of runs) this.take(run);
      // A run that was under way and is no longer listed ended while nobody listened: ask how.
      for (const run of this.active()) {
        const now = listed.has(run.id) ? null : await this.read(run.id);
        if (now) this.take(now);
      }
    } catch {
      // The next poll asks again; the page's own requests say what is wrong.
    }
  }

  private read(id: string): Promise<Run | null> {
    return firstValueFrom(this.http.get<Run>(`/api/runs/${id}`).pipe(catchError(() => [null])));
  }

  private take(run: Run, announced = false): void {
    const before = this.all().get(run.id);
    if (before && hasEnded(before)) return;
    if (run.share !== null && this.heard.get(run.id)?.attempt !== run.attempt) {
      this.heard.set(run.id, { attempt: run.attempt, share: run.share, at: performance.now() });
    }
    this.all.update((runs) => new Map(runs).set(run.id, run));
    if (hasEnded(run) && (before !== undefined || announced)) this.finishedRuns.next(run);
  }
}
