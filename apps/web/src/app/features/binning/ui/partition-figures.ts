import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { partitions, type BenchReading, type PartitionName, type PartitionTotals } from '@tallystone/numeric/bench';
import type { Column } from '../../../ui/column';
import { CellTemplate, DenseTable } from '../../../ui/dense-table';
import { PartitionMark } from '../../../ui/partition-mark';

interface PartitionRow {
  readonly partition: PartitionName;
  readonly covered: boolean;
  readonly totals: PartitionTotals | null;
  readonly change: number | null;
}

/** What the bins say in each partition, one under the other: IV, Gini, and how far its rows stand apart from development's. */
@Component({
  selector: 'ts-partition-figures',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [CellTemplate, DenseTable, PartitionMark],
  template: `
    <ts-table caption="Figures by partition" [columns]="columns" [rows]="rows()" [identify]="identify">
      <ng-template tsCell="partition" [tsCellRows]="rows()" let-row>
        <ts-partition [partition]="row.partition" [covered]="row.covered" />
      </ng-template>
    </ts-table>
  `,
  styles: `
    :host {
      display: block;
      min-width: 0;
    }
  `,
})
export class PartitionFigures {
  readonly reading = input.required<BenchReading>();
  /** Out-of-time rows are there and have not been opened: their line says so and has no figures. */
  readonly covered = input(false);

  protected readonly rows = computed<readonly PartitionRow[]>(() => {
    const { totals, stability } = this.reading();
    return partitions.flatMap((partition) => {
      const covered = partition === 'outOfTime' && this.covered();
      if (!covered && totals[partition] === null) return [];
      const change = partition === 'development' || covered ? null : stability[partition];
      return [{ partition, covered, totals: covered ? null : totals[partition], change }];
    });
  });
  protected readonly columns: readonly Column<PartitionRow>[] = [
    { key: 'partition', label: 'Partition', value: (row) => row.partition },
    { key: 'rows', label: 'Rows', kind: 'count', value: (row) => row.totals?.rows },
    // Weighted where the sample has weights.
    { key: 'goods', label: 'Goods', kind: 'number', decimals: 0, value: (row) => row.totals?.goods },
    { key: 'bads', label: 'Bads', kind: 'number', decimals: 0, value: (row) => row.totals?.bads },
    { key: 'iv', label: 'IV', kind: 'number', decimals: 3, value: (row) => row.totals?.informationValue },
    { key: 'gini', label: 'Gini', kind: 'metric', value: (row) => row.totals?.gini },
    { key: 'csi', label: 'CSI', unit: 'against development', kind: 'number', decimals: 3, value: (row) => row.change },
  ];
  protected readonly identify = (row: PartitionRow): string => row.partition;
}
