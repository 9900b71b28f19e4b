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
  readonly weight: number | null;
  readonly weightedBadRate?: number | null;
}

/** Who is in which partition. The outcome of out-of-time stays covered until it is opened. */
@Component({
  selector: 'ts-partition-table',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [CellTemplate, DenseTable, PartitionMark],
  template: `
    <ts-table caption="Partitions" [columns]="columns()" [rows]="rows()" [identify]="byName">
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
  /** Under weights the bad rate of the rows is not that of those who applied: both are told, side by side. */
  protected readonly columns = computed<readonly Column<Row>[]>(() => [
    ...counted,
    ...(this.rows()[0].weightedBadRate === undefined ? [] : weighted),
  ]);
}

const counted: readonly Column<Row>[] = [
  { key: 'partition', label: 'Partition', value: (row) => partitionName(row.partition) },
  { key: 'rows', label: 'Rows', kind: 'count', value: (row) => row.rows },
  { key: 'goods', label: 'Goods', kind: 'count', value: (row) => row.goods },
  { key: 'bads', label: 'Bads', kind: 'count', value: (row) => row.bads },
  { key: 'indeterminates', label: 'Indeterminates', kind: 'count', value: (row) => row.indeterminates },
  { key: 'badRate', label: 'Bad rate', kind: 'share', value: (row) => row.badRate },
];

const weighted: readonly Column<Row>[] = [
  { key: 'weight', label: 'Weight', unit: 'goods and bads', kind: 'number', decimals: 1, value: (row) => row.weight },
  { key: 'weightedBadRate', label: 'Bad rate', unit: 'weighted', kind: 'share', value: (row) => row.weightedBadRate ?? null },
];
