import { codedCorrelation } from '@tallystone/numeric/diagnostics/coded-correlation';
import { inflationOf } from '@tallystone/numeric/diagnostics/collinearity';
import { BAD, DEVELOPMENT, GOOD } from '../replay/types';
import type { Task } from '../threads/task';
import type { CountedRows } from './fine-classes';

export interface CorrelateCodes {
  /** Codes of every row and the WOE of each code. */
  readonly columns: readonly { readonly codes: Uint8Array; readonly values: readonly number[] }[];
  readonly counted: CountedRows;
}

/** Correlations over the development rows with a known outcome, row by row, NaN for a column without variance. */
export const correlateCodes: Task<CorrelateCodes, { readonly matrix: Float64Array; readonly rows: number }> = ({
  columns,
  counted,
}) => {
  const { partition, outcome, weights } = counted;
  const use = new Uint8Array(counted.rows);
  let rows = 0;
  for (let row = 0; row < use.length; row++) {
    if (partition[row] !== DEVELOPMENT || (outcome[row] !== GOOD && outcome[row] !== BAD)) continue;
    use[row] = 1;
    rows++;
  }
  return { matrix: codedCorrelation(columns, use, weights), rows };
};

/** Variance inflation factors of a correlation matrix; null is a column without variance. */
export const inflate: Task<{ readonly matrix: readonly (readonly (number | null)[])[] }, Float64Array> = ({ matrix }) =>
  inflationOf(matrix.map((line) => line.map((value) => value ?? NaN)));
