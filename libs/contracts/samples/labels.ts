import type { ColumnLabels } from './dictionary';

/** How a column is called. @example labelWords({ column: 'util', label: 'Card utilisation', unit: '%' }) // 'Card utilisation (%)' */
export const labelWords = ({ column, label, unit }: ColumnLabels['labels'][number]): string =>
  unit ? `${label || column} (${unit})` : label || column;
