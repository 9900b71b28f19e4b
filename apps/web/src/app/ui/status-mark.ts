import { ChangeDetectionStrategy, Component, input } from '@angular/core';

/** kept: done or approved. waiting: wants a decision. under-way: somebody or something works on it. ended: over. refused: failed. */
export type StatusTone = 'kept' | 'waiting' | 'under-way' | 'ended' | 'refused';

/**
 * A state in words with a small mark whose shape, not only its colour, says what kind of state it is.
 *
 * @example <ts-status tone="kept">Approved</ts-status>
 */
@Component({
  selector: 'ts-status',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '[class]': 'tone()' },
  template: `
    <svg width="14" height="14" viewBox="0 0 14 14" aria-hidden="true" focusable="false">
      @switch (tone()) {
        @case ('kept') {
          <path class="solid" d="M1 3h12v4.5h-3.5L7 11 4.5 7.5H1z" />
        }
        @case ('waiting') {
          <path class="solid" d="M7 1l6 11H1z" />
        }
        @case ('under-way') {
          <path class="line" d="M1 4h3.5L7 9l2.5-5H13" />
        }
        @case ('ended') {
          <path class="line" d="M1 7h12" />
        }
        @case ('refused') {
          <path class="line" d="M2.5 2.5l9 9m0-9l-9 9" />
        }
      }
    </svg>
    <span><ng-content /></span>
  `,
  styles: `
    :host {
      display: inline-flex;
      align-items: center;
      gap: 6px;
      color: var(--ts-ink);
      white-space: nowrap;
    }
    svg {
      flex: none;
      color: var(--ts-ink-2);
    }
    .solid {
      fill: currentColor;
    }
    .line {
      fill: none;
      stroke: currentColor;
      stroke-width: 1.8;
      stroke-linejoin: round;
    }
    :host(.kept) svg,
    :host(.under-way) svg {
      color: var(--ts-primary);
    }
    :host(.waiting) {
      color: var(--ts-ochre);
    }
    :host(.waiting) svg {
      color: var(--ts-ochre-mark);
    }
    :host(.refused) svg {
      color: var(--ts-bad);
    }
  `,
})
export class StatusMark {
  readonly tone = input.required<StatusTone>();
}
