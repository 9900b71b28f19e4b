import { ChangeDetectionStrategy, Component, computed, inject, input, signal } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { type Run, Runs, hasEnded } from '../core/events/runs';
import { duration, share } from './numbers';
import { ProblemList } from './problem-list';

/**
 * A run under way: what it is doing, how far it is, the time left and a way to stop it; how it ended, when it did not end well.
 *
 * @example <ts-run-progress [run]="run()" title="Fitting the penalty path" />
 */
@Component({
  selector: 'ts-run-progress',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, ProblemList],
  template: `
    @if (run(); as run) {
      @if (!ended()) {
        <div class="row">
          <div class="words">
            <b>{{ title() }}</b>
            <span class="ts-second">{{ words() }}</span>
          </div>
          @if (run.abilities.includes('cancel')) {
            <button matButton type="button" [disabled]="stopping()" (click)="stop()">
              {{ stopping() ? 'Stopping' : 'Cancel' }}
            </button>
          }
        </div>
        <div
          class="track"
          role="progressbar"
          [attr.aria-label]="title()"
          [attr.aria-valuenow]="percent()"
          aria-valuemin="0"
          aria-valuemax="100"
          [attr.aria-valuetext]="words()"
        >
          <div
            class="come"
            [class.unknown]="run.share === null"
            [style.width.%]="run.share === null ? 100 : run.share * 100"
          ></div>
        </div>
        <ts-problems [error]="problem()" />
      } @else if (run.state === 'failed') {
        <div class="failed" role="alert">
          <b>{{ title() }} did not finish.</b> {{ run.problem?.message }}
          <span class="ts-caption">Run {{ run.id }}</span>
        </div>
      } @else if (run.state === 'cancelled') {
        <p class="ts-second">{{ title() }} was cancelled. Nothing of it was kept.</p>
      }
    }
  `,
  styles: `
    :host {
      display: block;
    }
    .row {
      display: flex;
      flex-wrap: wrap;
      align-items: center;
      justify-content: space-between;
      gap: 4px 24px;
      min-height: 36px;
    }
    .words {
      display: flex;
      flex-wrap: wrap;
      gap: 0 12px;
    }
    .track {
      height: 6px;
      border-bottom: 1.6px solid var(--ts-ahead);
      margin-top: 2px;
    }
    .come {
      height: 4px;
      background: var(--ts-primary);
      transition: width 120ms linear;
    }
    .unknown {
      opacity: 0.35;
      animation: breathe 1.6s ease-in-out infinite alternate;
    }
    .failed {
      border-left: 3px solid var(--ts-bad);
      padding: 4px 0 4px 14px;
    }
    .ts-caption {
      display: block;
    }
    @keyframes breathe {
      to {
        opacity: 0.8;
      }
    }
    @media (prefers-reduced-motion: reduce) {
      .unknown {
        animation: none;
      }
    }
  `,
})
export class RunProgress {
  private readonly runs = inject(Runs);

  readonly run = input.required<Run | null>();
  /** What the run does, for people: "Reading the file". */
  readonly title = input.required<string>();

  private readonly asked = signal(false);
  protected readonly problem = signal<unknown>(null);
  protected readonly ended = computed(() => {
    const run = this.run();
    return run !== null && hasEnded(run);
  });
  protected readonly stopping = computed(() => this.asked() || this.run()?.state === 'cancelling');
  protected readonly percent = computed(() => {
    const share = this.run()?.share ?? null;
    return share === null ? null : Math.round(share * 100);
  });
  protected readonly words = computed(() => {
    const run = this.run();
    if (!run) return '';
    if (run.state === 'queued') return 'waiting for a worker';
    // A phase that is the whole of the run stands beside it already.
    const parts = [run.phase === this.title() ? null : run.phase, run.share === null ? null : share(run.share, 0)];
    const left = this.runs.secondsLeft(run);
    if (left !== null) parts.push(`about ${duration(left)} left`);
    return parts.filter(Boolean).join(', ');
  });

  protected async stop(): Promise<void> {
    const run = this.run();
    if (!run) return;
    this.asked.set(true);
    this.problem.set(null);
    try {
      await this.runs.cancel(run.id);
    } catch (error) {
      this.asked.set(false);
      this.problem.set(error);
    }
  }
}
