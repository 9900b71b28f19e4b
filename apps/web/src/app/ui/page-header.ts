import { ChangeDetectionStrategy, Component, inject, input } from '@angular/core';
import { HEADING_LEVEL } from './heading-level';

/**
 * Opens every page: its title and the one sentence that says what the data say. Inside a model the title is the section size, because
 * the model's name stands above. Project buttons into it; they sit at the right.
 *
 * @example <ts-page-header title="Binning" [finding]="finding()"><button matButton>Class again</button></ts-page-header>
 */
@Component({
  selector: 'ts-page-header',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <div class="words">
      @if (level === 1) {
        <h1 data-page-heading tabindex="-1">{{ title() }}</h1>
      } @else {
        <h2 data-page-heading tabindex="-1">{{ title() }}</h2>
      }
      @if (finding(); as sentence) {
        <p class="finding" aria-live="polite">{{ sentence }}</p>
      }
    </div>
    <div class="ts-actions ts-actions-end"><ng-content /></div>
  `,
  styles: `
    :host {
      display: flex;
      flex-wrap: wrap;
      gap: 12px 24px;
      align-items: flex-start;
      justify-content: space-between;
    }
    .words {
      flex: 1 1 320px;
      min-width: 0;
    }
    .finding {
      color: var(--ts-ink-2);
      margin-top: 4px;
    }
    .ts-actions:empty {
      display: none;
    }
  `,
})
export class PageHeader {
  readonly title = input.required<string>();
  readonly finding = input<string | null>(null);
  protected readonly level = inject(HEADING_LEVEL);
}
