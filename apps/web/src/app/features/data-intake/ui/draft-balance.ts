import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import type { DraftBalance as Compared } from '@tallystone/contracts/samples/balance';
import { moment } from '../../../ui/numbers';
import { BalanceTable } from './balance-table';

/** The balance of a draft: compared when somebody asks, shown until the draft changes. Every partition that was compared stays in sight. */
@Component({
  selector: 'ts-draft-balance',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [BalanceTable, MatButtonModule],
  template: `
    @if (current(); as characteristics) {
      <ts-balance-table [characteristics]="characteristics" />
    } @else {
      <h4>Balance of the partition</h4>
      @if (compared().last) {
        <p>The draft was changed since its partitions were compared.</p>
      }
      @if (editable()) {
        <div class="ts-actions">
          <button matButton="outlined" type="button" [disabled]="!ready()" (click)="asked.emit()">
            {{ compared().last ? 'Compare them again' : 'Compare the partitions' }}
          </button>
        </div>
      }
    }
    @if (compared().compared.length > 0) {
      <p class="ts-caption">Compared so far:</p>
      <ol class="ts-caption">
        @for (entry of compared().compared; track entry.partition) {
          <li>
            {{ entry.partition }}:
            {{ entry.largest === null ? 'nothing to compare with' : 'largest index ' + entry.largest.toFixed(3) }};
            {{ entry.comparedBy }}, {{ moment(entry.comparedAt) }}
          </li>
        }
      </ol>
    }
    <p class="ts-caption">
      Every partition that is compared is kept with the definition and stands in the document: whoever tries seeds until one
      pleases has chosen by what was seen.
    </p>
  `,
  styles: `
    :host {
      display: grid;
      gap: 6px;
      grid-template-columns: minmax(0, 1fr);
    }
    ol {
      margin: 0;
      padding-left: 20px;
    }
  `,
})
export class DraftBalance {
  readonly compared = input.required<Compared>();
  /** Of the draft as it is shown; null while it holds changes that are not saved. */
  readonly revision = input.required<number | null>();
  readonly editable = input(false);
  /** Whether the draft is saved and counted, and nothing runs. */
  readonly ready = input(false);
  readonly asked = output<void>();
  protected readonly moment = moment;
  protected readonly current = computed(() => {
    const { last } = this.compared();
    return last?.current && last.revision === this.revision() ? last.characteristics : null;
  });
}
