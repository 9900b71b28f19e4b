/** What is measured: rows x columns, penalties, and what of it. */
export interface BenchCase {
  readonly name: string;
  readonly rows: number;
  readonly columns: number;
  readonly mixing: number;
  readonly kind: 'path' | 'bootstrap' | 'refit';
  /** Times the measurement is taken, ours and glmnet's in turn. */
  readonly rounds: number;
  /** glmnet's cross-validation takes too long: its time is that of the path times the ratio of this case. */
  readonly extrapolateFrom?: string;
}

export const CASES: readonly BenchCase[] = [
  { name: 'a', rows: 1000, columns: 60, mixing: 1, kind: 'path', rounds: 9 },
  { name: 'b', rows: 30_000, columns: 25, mixing: 1, kind: 'path', rounds: 3 },
  { name: 'b-ridge', rows: 30_000, columns: 25, mixing: 0, kind: 'path', rounds: 3 },
  { name: 'b-net', rows: 30_000, columns: 25, mixing: 0.5, kind: 'path', rounds: 3 },
  { name: 'c', rows: 300_000, columns: 50, mixing: 1, kind: 'path', rounds: 1 },
  { name: 'd', rows: 1_000_000, columns: 100, mixing: 1, kind: 'path', rounds: 1, extrapolateFrom: 'c' },
  { name: 'bootstrap', rows: 30_000, columns: 25, mixing: 1, kind: 'bootstrap', rounds: 3 },
  { name: 'refit', rows: 100_000, columns: 40, mixing: 1, kind: 'refit', rounds: 5 },
];
