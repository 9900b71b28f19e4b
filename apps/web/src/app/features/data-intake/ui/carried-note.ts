import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { CarriedDictionary } from '@tallystone/contracts/samples/dictionary';
import { plural } from '../../../ui/numbers';

/** What was taken over from an earlier sample of the model, and what was not, with its reason. */
@Component({
  selector: 'ts-carried-note',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <p>{{ words() }}</p>
    @if (carried().notCarried.length > 0) {
      <details>
        <summary>{{ rest() }}</summary>
        <ul>
          @for (entry of carried().notCarried; track entry.column) {
            <li>
              <b>{{ entry.column }}</b> {{ entry.why }}
            </li>
          }
        </ul>
      </details>
    }
  `,
  styles: `
    :host {
      display: grid;
      gap: 4px;
      padding: 10px 14px;
      background: var(--ts-sunk);
      border-radius: var(--ts-corner);
    }
    summary {
      min-height: 24px;
      cursor: pointer;
    }
    ul {
      padding-left: 20px;
    }
  `,
})
export class CarriedNote {
  readonly carried = input.required<CarriedDictionary>();
  protected readonly words = computed(
    () =>
      this.carried().wordsFrom === null
        ? `Roles, special codes and words of ${plural(this.carried().columns.length, 'column')} are carried over from ${this.carried().fileName}: same name and kind.`
        : this.carried().wordsFrom === this.carried().fileName
          ? `Words of ${plural(this.carried().columns.length, 'column')} are carried over from ${this.carried().fileName}, which has no definition yet: same name and kind.`
          : `Roles and special codes of ${plural(this.carried().columns.length, 'column')} are carried over from ${this.carried().fileName}, words from ${this.carried().wordsFrom}: same name and kind.`,
  );
  protected readonly rest = computed(() => `${plural(this.carried().notCarried.length, 'column')} not carried over`);
}
