import type { CodedColumn, EngineColumn } from './coded-columns';

/**
 * Codes that serve all folds: columns whose values differ from fold to fold (weights of evidence from training rows) stay one code per row as long as
 * rows with equal codes have equal values in every fold. Where two bins happen to have equal values in one fold and not in another, their code is split.
 */
export class FoldValues {
  /** Per coded column, the values by code: first those of all rows, then of fold after fold; null = those of all rows. */
  private readonly tables: (Float64Array | null)[][];
  readonly columns: EngineColumn[];

  constructor(columns: readonly EngineColumn[]) {
    this.columns = [...columns];
    this.tables = columns.map(() => []);
  }

  /** Takes the next fold's columns; false where codes cannot express them. */
  add(own: readonly Float64Array[] | null): boolean {
    return this.columns.every((column, j) => {
      if (own === null) return this.tables[j].push(null) > 0;
      if (column.kind === 'linear') {
        this.tables[j].push(null);
        return own[j] === column.values || own[j].every((value, i) => value === column.values[i]);
      }
      return this.addColumn(j, column, own[j]);
    });
  }

  /** Values by code of each column in a fold, from 1, or null. */
  valuesOf(fold: number): readonly ArrayLike<number>[] | null {
    const tables = this.tables.map((own) => own[fold - 1]);
    if (tables.every((table) => table === null)) return null;
    return tables.map((table, j) => table ?? this.columns[j].values);
  }

  private addColumn(j: number, column: CodedColumn, own: Float64Array): boolean {
    const { codes, values } = column;
    const table = new Float64Array(values.length).fill(NaN);
    let split = false;
    for (let i = 0; i < codes.length && !split; i++) {
      const code = codes[i];
      if (table[code] !== table[code]) table[code] = own[i];
      else split = table[code] !== own[i];
    }
    if (split) return this.split(j, column, own);
    // A code without rows keeps its own value, which nothing uses.
    this.tables[j].push(table.map((value, code) => (value === value ? value : values[code])));
    return true;
  }

  private split(j: number, column: CodedColumn, own: Float64Array): boolean {
    const pairs = new Map<string, number>();
    const from: number[] = [];
    const table: number[] = [];
    const codes = new Uint8Array(column.codes.length);
    for (let i = 0; i < codes.length; i++) {
      const key = `${column.codes[i]} ${own[i]}`;
      let code = pairs.get(key);
      if (code === undefined) {
        code = from.length;
        if (code > 250) return false;
        pairs.set(key, code);
        from.push(column.codes[i]);
        table.push(own[i]);
      }
      codes[i] = code;
    }
    const again = (values: ArrayLike<number>): Float64Array => Float64Array.from(from, (code) => values[code]);
    this.columns[j] = { kind: 'coded', codes, values: again(column.values) };
    this.tables[j] = this.tables[j].map((earlier) => (earlier === null ? null : again(earlier)));
    this.tables[j].push(Float64Array.from(table));
    return true;
  }
}
