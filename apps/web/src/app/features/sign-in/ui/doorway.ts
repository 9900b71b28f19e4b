import { ChangeDetectionStrategy, Component, input } from '@angular/core';
import { Mark } from '../../../ui/mark';

/** The layout of the pages in front of the frame: the form, and beside it the two halves of a tally about to meet. */
@Component({
  selector: 'ts-doorway',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [Mark],
  template: `
    <main id="main" class="form">
      <div class="brand"><ts-mark /><span>Tallystone</span></div>
      <div class="words">
        <h1 data-page-heading tabindex="-1">{{ title() }}</h1>
        @if (text()) {
          <p class="ts-second">{{ text() }}</p>
        }
      </div>
      <div class="body"><ng-content /></div>
    </main>
    <div class="picture" aria-hidden="true">
      <svg viewBox="0 0 560 206" focusable="false">
        <path
          class="half"
          d="M0 0h560v76h-64l-17 28-17-28h-74l-17 28-17-28h-26l-17 28-17-28H190l-17 28-17-28h-26l-17 28-17-28H0z"
        />
        <path
          class="other"
          d="M1 205h558v-94h-63l-17 28-17-28h-74l-17 28-17-28h-26l-17 28-17-28H190l-17 28-17-28h-26l-17 28-17-28H1z"
        />
      </svg>
      <p>One half with the modeller, one with the validator. A version counts when the halves match.</p>
    </div>
  `,
  styles: `
    :host {
      display: grid;
      grid-template-columns: minmax(0, 1fr) minmax(0, 1.15fr);
      min-height: 100vh;
    }
    .form {
      display: grid;
      align-content: start;
      gap: 24px;
      padding: clamp(28px, 12vh, 128px) var(--ts-margin) 48px clamp(var(--ts-margin), 9vw, 128px);
    }
    .body {
      display: grid;
      gap: 20px;
      max-width: 400px;
    }
    .brand {
      display: flex;
      align-items: center;
      gap: 10px;
      font-weight: 600;
    }
    .words {
      display: grid;
      gap: 4px;
      margin-top: 20px;
    }
    .picture {
      display: grid;
      align-content: center;
      gap: 20px;
      padding: 48px clamp(24px, 5vw, 80px);
      background: var(--ts-sunk);
      color: var(--ts-ink-2);
      border-left: 1px solid var(--ts-hairline);
    }
    .picture p {
      max-width: 40ch;
    }
    .half {
      fill: var(--ts-primary);
    }
    .other {
      fill: var(--ts-surface);
      stroke: var(--ts-primary);
      stroke-width: 2;
      stroke-linejoin: round;
    }
    @media (max-width: 899px) {
      :host {
        grid-template-columns: minmax(0, 1fr);
        align-content: start;
      }
      .picture {
        display: none;
      }
      .form {
        padding: 28px var(--ts-margin) 48px;
      }
      .body {
        max-width: 480px;
      }
    }
  `,
})
export class Doorway {
  readonly title = input.required<string>();
  readonly text = input<string | null>(null);
}
