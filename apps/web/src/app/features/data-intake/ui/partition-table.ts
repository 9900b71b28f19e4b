import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { DefinitionCounts } from '@tallystone/contracts/samples/definition';
import { type Column } from '../../../ui/column';
import { CellTemplate, DenseTable } from '../../../ui/dense-table';
import { PartitionMark, partitionName, type Partition } from '../../../ui/partition-mark';

interface Row {
  readonly partition: Partition;
  readonly covered: boolean;
  readonly rows: number;
  readonly goods: number | null;
  readonly bads: number | null;
  readonly indeterminates: number | null;
  readonly badRate: number | null;
}

/** Who is in which partition. The outcome of out-of-time stays covered until it is opened. */
@Component({
  selector: 'ts-partition-table',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [CellTemplate, DenseTable, PartitionMark],
  template: `
    <ts-table caption="Partitions" [columns]="columns" [rows]="rows()" [identify]="byName">
      <ng-template tsCell="partition" [tsCellRows]="rows()" let-row>
        <ts-partition [partition]="row.partition" [covered]="row.covered" />
      </ng-template>
    </ts-table>
  `,
})
export class PartitionTable {
  readonly counts = input.required<DefinitionCounts>();
  protected readonly rows = computed<readonly Row[]>(() => {
    const { development, holdOut, outOfTime } = this.counts().partitions;
    return [
      { partition: 'development', covered: false, ...development },
      { partition: 'holdOut', covered: false, ...holdOut },
      { partition: 'outOfTime', ...outOfTime },
    ];
  });
  protected readonly byName = (row: Row): string => row.partition;
  protected readonly columns: readonly Column<Row>[] = [
    { key: 'partition', label: 'Partition', value: (row) => partitionName(row.partition) },
    { key: 'rows', label: 'Rows', kind: 'count', value: (row) => row.rows },
    { key: 'goods', label: 'Goods', kind: 'count', value: (row) => row.goods },
    { key: 'bads', label: 'Bads', kind: 'count', value: (row) => row.bads },
    { key: 'indeterminates', label: 'Indeterminates', kind: 'count', value: (row) => row.indeterminates },
    { key: 'badRate', label: 'Bad rate', kind: 'share', value: (row) => row.badRate },
  ];
}
