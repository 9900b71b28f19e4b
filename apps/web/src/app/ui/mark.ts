import { ChangeDetectionStrategy, Component } from '@angular/core';

/** The mark: a split tally, the solid half and the outlined half meeting in their notches. */
@Component({
  selector: 'ts-mark',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <svg width="34" height="26" viewBox="0 0 34 26" aria-hidden="true" focusable="false">
      <path class="solid" d="M1.5 3h31v8.4h-4.6L25 6.9l-2.9 4.5h-2.2L17 6.9l-2.9 4.5h-2.2L9 6.9l-2.9 4.5H1.5z" />
      <path class="line" d="M2.2 22.6v-8.2h5.4L9 12.2l1.4 2.2h5.2l1.4-2.2 1.4 2.2h5.2l1.4-2.2 1.4 2.2h5.4v8.2z" />
    </svg>
  `,
  styles: `
    :host {
      display: block;
      line-height: 0;
    }
    .solid {
      fill: var(--ts-primary);
    }
    .line {
      fill: none;
      stroke: var(--ts-primary);
      stroke-width: 1.4;
      stroke-linejoin: round;
    }
  `,
})
export class Mark {}
