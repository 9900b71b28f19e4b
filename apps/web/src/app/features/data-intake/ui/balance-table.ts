import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { CharacteristicBalance } from '@tallystone/contracts/samples/balance';
import { balanceFinding, byIndex, readingWords } from '@tallystone/contracts/samples/balance-reading';
import { type Column } from '../../../ui/column';
import { DenseTable } from '../../../ui/dense-table';
import { movedMost } from './balance-view';

/** Each characteristic by partition against development, the most unlike first. Inputs only: it tells no outcome. */
@Component({
  selector: 'ts-balance-table',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [DenseTable],
  template: `
    <h4>Balance of the partition</h4>
    @if (rows(); as rows) {
      <p>{{ finding() }}</p>
      <ts-table caption="Stability index by characteristic, against development" [columns]="columns" [rows]="rows" [identify]="byColumn" />
      <p class="ts-caption">
        Inputs only: no outcome enters, and that of out-of-time stays covered. Rows with a good or bad outcome; tenths of development, with each special
        code and missing in a class of its own. The usual reading of the index is below 0.10, to 0.25, above (common practice). It knows nothing of
        the number of rows: beside it stands what chance alone stays below in 95 of 100 draws when nothing has changed (Yurdakul 2018).
      </p>
    } @else {
      <p class="ts-caption">Not worked out when this definition was confirmed. Confirm another definition to have it.</p>
    }
  `,
  styles: `
    :host {
      display: grid;
      gap: 6px;
      grid-template-columns: minmax(0, 1fr);
    }
  `,
})
export class BalanceTable {
  readonly characteristics = input.required<readonly CharacteristicBalance[] | null>();
  protected readonly rows = computed(() => {
    const characteristics = this.characteristics();
    return characteristics === null ? null : byIndex(characteristics);
  });
  protected readonly finding = computed(() => balanceFinding(this.characteristics() ?? []));
  protected readonly byColumn = (row: CharacteristicBalance): string => row.column;
  protected readonly columns: readonly Column<CharacteristicBalance>[] = [
    { key: 'column', label: 'Characteristic', value: (row) => row.column },
    ...(['holdOut', 'outOfTime'] as const).flatMap((partition): Column<CharacteristicBalance>[] => {
      const unit = partition === 'holdOut' ? 'hold-out' : 'out-of-time';
      return [
        { key: `${partition}-index`, label: 'Index', unit, kind: 'number', decimals: 3, value: (row) => row[partition]?.index ?? null },
        { key: `${partition}-chance`, label: 'By chance', unit: 'stays below', kind: 'number', decimals: 3, value: (row) => row[partition]?.criticalValue ?? null },
        { key: `${partition}-reading`, label: 'Reading', unit, width: 32, value: (row) => readingWords(row[partition]) },
      ];
    }),
    { key: 'moved', label: 'Moved most', width: 40, value: movedMost },
  ];
}
