import type { BenchReading, FineClasses, PartitionName } from '@tallystone/numeric/bench';
import type { Column } from '../../../ui/column';
import type { FigureTable } from '../../../ui/figure-frame';
import { binWords } from '../../../ui/numbers';
import { partitionName } from '../../../ui/partition-mark';

interface TableRow {
  readonly bin: number;
  readonly label: string;
  readonly partition: PartitionName;
}

/** What the binning figure shows as a table, by bin and partition. */
export function figuresTable(fine: FineClasses, { bins }: BenchReading): FigureTable<TableRow> {
  const names: PartitionName[] = ['development', 'holdOut', ...(fine.outOfTime ? (['outOfTime'] as const) : [])];
  const rows: TableRow[] = bins.flatMap(({ label }, bin) => names.map((partition) => ({ bin, label, partition })));
  const figures = ({ bin, partition }: TableRow) => bins[bin].figures[partition];
  const columns: Column<TableRow>[] = [
    { key: 'bin', label: 'Bin', value: (row) => row.label, format: (row) => binWords(row.label) },
    { key: 'partition', label: 'Partition', value: (row) => partitionName(row.partition) },
    { key: 'rows', label: 'Rows', kind: 'count', value: (row) => figures(row)?.rows },
    { key: 'goods', label: 'Goods', kind: 'number', decimals: 0, value: (row) => figures(row)?.goods },
    { key: 'bads', label: 'Bads', kind: 'number', decimals: 0, value: (row) => figures(row)?.bads },
    { key: 'share', label: 'Share', kind: 'share', value: (row) => figures(row)?.share },
    { key: 'rate', label: 'Bad rate', kind: 'share', value: (row) => figures(row)?.badRate },
    { key: 'lower', label: 'From', unit: '95 % interval', kind: 'share', value: (row) => figures(row)?.lower },
    { key: 'upper', label: 'To', unit: '95 % interval', kind: 'share', value: (row) => figures(row)?.upper },
    { key: 'odds', label: 'Log odds', kind: 'woe', value: (row) => figures(row)?.logOdds },
    { key: 'woe', label: 'WOE', kind: 'woe', value: (row) => figures(row)?.woe },
    { key: 'part', label: 'IV part', kind: 'number', decimals: 3, value: (row) => figures(row)?.part },
  ];
  return { columns, rows };
}
