import { ChangeDetectionStrategy, Component, input } from '@angular/core';

/**
 * Where there is nothing yet: what would stand here and the next action. Project the button or link that begins it.
 *
 * @example <ts-empty title="No sample yet" text="Bring in a CSV of past applicants to begin."><a matButton="filled" routerLink="upload">Bring in a file</a></ts-empty>
 */
@Component({
  selector: 'ts-empty',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <svg width="64" height="22" viewBox="0 0 64 22" aria-hidden="true" focusable="false">
      <path d="M1 4h13l5 8 5-8h13l5 8 5-8h16" />
    </svg>
    <p class="title">{{ title() }}</p>
    @if (text()) {
      <p class="text">{{ text() }}</p>
    }
    <div class="ts-actions"><ng-content /></div>
  `,
  styles: `
    :host {
      display: grid;
      gap: 4px;
      padding: 28px 0;
      justify-items: start;
    }
    path {
      fill: none;
      stroke: var(--ts-ahead);
      stroke-width: 1.6;
    }
    .title {
      font-weight: 600;
      font-size: 17px;
      line-height: 24px;
      margin-top: 6px;
    }
    .text {
      color: var(--ts-ink-2);
    }
    .ts-actions {
      margin-top: 14px;
    }
    .ts-actions:empty {
      display: none;
    }
  `,
})
export class EmptyState {
  readonly title = input.required<string>();
  readonly text = input<string | null>(null);
}
