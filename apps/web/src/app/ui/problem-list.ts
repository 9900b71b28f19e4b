import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { type Problem, asProblem } from '../core/http/problem';

const saidAlready: readonly string[] = ['lines', 'values', 'count'];

/**
 * What went wrong, where, and what to do next: every problem of the input at once. Give it whatever a request rejected with.
 *
 * @example <ts-problems [error]="saving.error()" next="Correct the file and bring it in again." />
 */
@Component({
  selector: 'ts-problems',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    @if (problem(); as problem) {
      <div class="problem" role="alert">
        <p class="title">{{ problem.title }}</p>
        @if (detail(); as detail) {
          <p>{{ detail }}</p>
        }
        @if (problem.problems.length > 0) {
          <ul>
            @for (item of shown(); track $index) {
              <li>
                @if (place(item); as place) {
                  <span class="place">{{ place }}</span>
                }
                {{ item.message }}
              </li>
            }
          </ul>
          @if (problem.problems.length > shown().length) {
            <p class="ts-caption">and {{ problem.problems.length - shown().length }} more of the same kind</p>
          }
        }
        @if (problem.retryAfterSeconds; as seconds) {
          <p>Try again in {{ seconds }} s.</p>
        }
        @if (next()) {
          <p>{{ next() }}</p>
        }
        @if (problem.requestId) {
          <p class="ts-caption">Request {{ problem.requestId }}</p>
        }
        <div class="ts-actions"><ng-content /></div>
      </div>
    }
  `,
  styles: `
    .problem {
      border-left: 3px solid var(--ts-bad);
      padding: 4px 0 4px 14px;
      display: grid;
      gap: 4px;
    }
    .title {
      font-weight: 600;
    }
    ul {
      list-style: none;
      max-width: 80ch;
    }
    li {
      padding: 3px 0;
      border-top: 1px solid var(--ts-hairline);
    }
    .place {
      color: var(--ts-ink-2);
      margin-right: 8px;
    }
    .ts-actions {
      margin-top: 6px;
    }
    .ts-actions:empty {
      display: none;
    }
  `,
})
export class ProblemList {
  readonly error = input<unknown>(null);
  /** What the person can do now, where the server's words do not say it. */
  readonly next = input<string | null>(null);
  /** How many single problems are shown at most. */
  readonly limit = input(50);

  protected readonly problem = computed<Problem | null>(() => (this.error() ? asProblem(this.error()) : null));
  /** Of an input with one problem the server says it in the detail too. */
  protected readonly detail = computed(() => {
    const { detail, title, problems } = this.problem() ?? { detail: '', title: '', problems: [] };
    return detail === title || problems.some(({ message }) => message === detail) ? '' : detail;
  });
  protected readonly shown = computed(() => this.problem()?.problems.slice(0, this.limit()) ?? []);

  /** { line: 812, column: 'income' } reads "line 812, column income". How many lines or values, and which, the message says itself. */
  protected place({ where, message }: Problem['problems'][number]): string | null {
    const parts = Object.entries(where)
      .filter(([key, value]) => key !== 'line' || !message.startsWith(`Line ${String(value)}:`))
      .filter(([key, value]) => value !== null && value !== undefined && typeof value !== 'object' && !saidAlready.includes(key))
      .map(([key, value]) => (key === 'path' || key === 'field' ? String(value) : `${key} ${String(value)}`));
    return parts.length > 0 ? parts.join(', ') : null;
  }
}
