import { type CsvCell } from './csv';
import { DASH, count, fixed, metric, moment, points, share, significant, woe } from './numbers';

/** How a column's values are written and aligned; numbers stand right in tabular figures. */
export type ColumnKind = 'text' | 'count' | 'metric' | 'woe' | 'points' | 'share' | 'number' | 'moment';

/** One column of a dense table or of a figure's table. `value` gives the raw value: it sorts, and goes into CSV at full precision. */
export interface Column<Row> {
  readonly key: string;
  readonly label: string;
  /** Stands under the label: "points", "months". A share says "%" itself, and is a share of 1 in CSV. */
  readonly unit?: string;
  readonly kind?: ColumnKind;
  /** Decimals for `number` (significant digits when left out) and `share`. */
  readonly decimals?: number;
  readonly value: (row: Row) => CsvCell;
  /** Writes the value in another way than the kind would. */
  readonly format?: (row: Row) => string;
  /** Makes the cell a link: commands for routerLink. */
  readonly link?: (row: Row) => readonly unknown[] | null;
  /** Widest width in characters before the text wraps; 28 unless told. */
  readonly width?: number;
  readonly sortable?: boolean;
}

export function isNumeric(column: { readonly kind?: ColumnKind }): boolean {
  return column.kind !== undefined && column.kind !== 'text' && column.kind !== 'moment';
}

/** The cell as people read it: a dash where there is no value. */
export function cellText<Row>(column: Column<Row>, row: Row): string {
  if (column.format) return column.format(row);
  const value = column.value(row);
  if (value === null || value === undefined || value === '') return DASH;
  if (typeof value === 'boolean') return value ? 'yes' : 'no';
  if (typeof value === 'string') return column.kind === 'moment' ? moment(value) : value;
  switch (column.kind) {
    case 'count':
      return count(value);
    case 'metric':
      return metric(value);
    case 'woe':
      return woe(value);
    case 'points':
      return points(value);
    case 'share':
      return share(value, column.decimals);
    case 'number':
      return column.decimals === undefined ? significant(value) : fixed(value, column.decimals);
    default:
      return String(value);
  }
}

/** "Loan term (months)" for CSV headers, so that the unit travels with the figures. */
export function headerText(column: { readonly label: string; readonly unit?: string }): string {
  return column.unit ? `${column.label} (${column.unit})` : column.label;
}

/** Sorts by raw value: numbers as numbers, text by the reader's alphabet, missing always last. */
export function sorted<Row>(rows: readonly Row[], column: Column<Row>, descending: boolean): Row[] {
  const sign = descending ? -1 : 1;
  return [...rows].sort((a, b) => {
    const x = column.value(a);
    const y = column.value(b);
    const xMissing = x === null || x === undefined || x === '' || Number.isNaN(x);
    const yMissing = y === null || y === undefined || y === '' || Number.isNaN(y);
    if (xMissing || yMissing) return Number(xMissing) - Number(yMissing);
    if (typeof x === 'number' && typeof y === 'number') return sign * (x - y);
    return sign * String(x).localeCompare(String(y), undefined, { numeric: true });
  });
}
