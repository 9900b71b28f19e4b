import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { FineClasses } from '@tallystone/numeric/bench';
import { count, plural } from '../../../ui/numbers';

/** How many names are listed; of the others the number stands. */
const most = 200;

/** Which categories the bench shows as one, because there are more than it can tell apart. */
@Component({
  selector: 'ts-pooled-note',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    @if (pooled(); as pooled) {
      <details>
        <summary>{{ words() }}</summary>
        <p class="ts-caption">{{ names() }}</p>
      </details>
    }
  `,
  styles: `
    :host {
      display: block;
    }
    summary {
      cursor: pointer;
    }
    p {
      margin: 4px 0 0;
      max-width: 90ch;
      overflow-wrap: anywhere;
    }
  `,
})
export class PooledNote {
  readonly fine = input.required<Pick<FineClasses, 'pooled' | 'categories'>>();
  protected readonly pooled = computed(() => this.fine().pooled ?? null);
  protected readonly words = computed(() => {
    const { pooled, categories } = this.fine();
    if (!pooled) return '';
    return `The ${count(pooled.categories.length)} rarest categories of ${count(pooled.categories.length + categories.length - 1)} are classed as one, “${pooled.name}”.`;
  });
  protected readonly names = computed(() => {
    const list = this.pooled()?.categories ?? [];
    const more = list.length - most;
    return `${list.slice(0, most).join(', ')}${more > 0 ? ` and ${plural(more, 'other', 'others')}; the specification lists all of them` : ''}.`;
  });
}
