import { ChangeDetectionStrategy, Component, input } from '@angular/core';
import type { KeptDraft } from '@tallystone/contracts/samples/dictionary';
import { plural } from '../../../ui/numbers';

/** What stayed of the draft when the file was read again, and what could not. */
@Component({
  selector: 'ts-read-again-note',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    @if (kept().lost.length === 0) {
      <p>The file was read again: the draft stayed as it was.</p>
    } @else {
      <p>The file was read again: the draft stayed as it was but for {{ plural(kept().lost.length, 'point') }}.</p>
      <ul>
        @for (entry of kept().lost; track $index) {
          <li>
            <b>{{ entry.what }}</b> {{ entry.why }}
          </li>
        }
      </ul>
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
    ul {
      padding-left: 20px;
    }
  `,
})
export class ReadAgainNote {
  readonly kept = input.required<KeptDraft>();
  protected readonly plural = plural;
}
