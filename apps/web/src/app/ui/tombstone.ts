import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { erasedWords, noLongerReplicable } from '@tallystone/contracts/samples/erased-words';
import type { Erasure } from '@tallystone/contracts/samples/erasure';

/**
 * Stands where the rows of a sample were: which, since when, by whom and why they were erased. What that means for the page goes inside.
 *
 * @example <ts-tombstone [erased]="binning.erased">Bins are read and no longer changed.</ts-tombstone>
 */
@Component({
  selector: 'ts-tombstone',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { role: 'note', 'aria-label': 'Rows erased' },
  template: `
    <svg width="22" height="24" viewBox="0 0 22 24" aria-hidden="true" focusable="false">
      <path d="M3 22V10a8 8 0 0 1 16 0v12M1 22h20" />
    </svg>
    <div>
      <p>{{ words() }}</p>
      <p class="ts-second"><ng-content /></p>
    </div>
  `,
  styles: `
    :host {
      display: grid;
      grid-template-columns: auto minmax(0, 1fr);
      gap: 14px;
      padding: 14px 16px;
      background: var(--ts-sunk);
    }
    path {
      fill: none;
      stroke: var(--ts-ink-2);
      stroke-width: 1.6;
    }
    p {
      max-width: var(--ts-measure);
      overflow-wrap: anywhere;
    }
    .ts-second:empty {
      display: none;
    }
  `,
})
export class Tombstone {
  readonly erased = input.required<Erasure>();
  /** Said of the rows themselves, or of a version that rests on them. */
  readonly of = input<'rows' | 'version'>('rows');
  protected readonly words = computed(() => (this.of() === 'version' ? noLongerReplicable(this.erased()) : erasedWords(this.erased())));
}
