import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { DefinitionCounts, SensitivityCase } from '@tallystone/contracts/samples/definition';
import { type Column } from '../../../ui/column';
import { DenseTable } from '../../../ui/dense-table';
import { sensitivityFinding } from './findings';

/** Counts and bad rates with the indeterminates as they are, all as good, all as bad. Nothing where no row is indeterminate. */
@Component({
  selector: 'ts-sensitivity-table',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [DenseTable],
  template: `
    @if (cases().length > 0) {
      <h4>Sensitivity to the indeterminates</h4>
      <p>{{ finding() }}</p>
      <ts-table caption="Sensitivity to the indeterminates" [columns]="columns" [rows]="cases()" [identify]="byReading" />
      <p class="ts-caption">
        Each case carries the definition out anew, hold-out drawn from its goods and bads. Out-of-time is not counted here. Indeterminates are
        usually at most 10 to 15 % of the rows (common practice).
      </p>
    } @else if (counts().sensitivity === null) {
      <p class="ts-caption">Sensitivity to the indeterminates: not counted when this definition was confirmed.</p>
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
export class SensitivityTable {
  readonly counts = input.required<DefinitionCounts>();
  protected readonly cases = computed<readonly SensitivityCase[]>(() => this.counts().sensitivity ?? []);
  protected readonly finding = computed(() => sensitivityFinding(this.counts()));
  protected readonly byReading = (row: SensitivityCase): string => row.indeterminates;
  protected readonly columns: readonly Column<SensitivityCase>[] = [
    { key: 'reading', label: 'Indeterminates', value: (row) => row.indeterminates, sortable: false },
    { key: 'goods', label: 'Goods', unit: 'development', kind: 'count', value: (row) => row.development.goods, sortable: false },
    { key: 'bads', label: 'Bads', unit: 'development', kind: 'count', value: (row) => row.development.bads, sortable: false },
    { key: 'rate', label: 'Bad rate', unit: 'development', kind: 'share', value: (row) => row.development.badRate, sortable: false },
    { key: 'holdOut', label: 'Bad rate', unit: 'hold-out', kind: 'share', value: (row) => row.holdOut.badRate, sortable: false },
  ];
}
