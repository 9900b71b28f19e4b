/** Where the chain's columns come from: a raw file in memory, the product's column store, or a test. */

/**
 * A column whose texts are kept: `codes[row]` is an index into `texts`. "" is an empty field; whatever else counts as missing is
 * decided by the specification. This is the form every column that is used as text must have.
 */
export interface TextColumn {
  kind: 'texts';
  codes: Uint8Array | Uint16Array | Uint32Array;
  texts: readonly string[];
}

/**
 * A column of which only numbers are kept. NaN = the field is empty, unless `exceptions` has the row's text. Used as text, a number
 * is spelled as JavaScript spells it (`String(value)`): store columns as texts where the spelling matters ("007").
 */
export interface NumberColumn {
  kind: 'numbers';
  values: Float64Array;
  exceptions?: ReadonlyMap<number, string>;
}

export type SourceColumn = TextColumn | NumberColumn;

export interface ColumnSource {
  /** Data records; row r (from 0) is data record r + 1. */
  readonly rows: number;
  /** Undefined if there is no such column. */
  column(name: string): SourceColumn | undefined;
}

/** The narrowest code array that can hold `distinct` different codes. */
export function codesFor(distinct: number, rows: number): Uint8Array | Uint16Array | Uint32Array {
  if (distinct <= 0x100) return new Uint8Array(rows);
  return distinct <= 0x1_0000 ? new Uint16Array(rows) : new Uint32Array(rows);
}

/**
 * A source from texts in memory.
 * @example sourceOf({ age: ['23', '', '41'], bad: ['0', '1', '0'] })
 */
export function sourceOf(columns: Record<string, readonly string[]>): ColumnSource {
  const coded = new Map<string, TextColumn>();
  let rows = 0;
  for (const [name, values] of Object.entries(columns)) {
    rows = values.length;
    const places = new Map<string, number>();
    for (const text of values) if (!places.has(text)) places.set(text, places.size);
    const codes = codesFor(places.size, rows);
    values.forEach((text, row) => (codes[row] = places.get(text) ?? 0));
    coded.set(name, { kind: 'texts', codes, texts: [...places.keys()] });
  }
  return { rows, column: (name) => coded.get(name) };
}

/** The distinct texts of a column with a code per row, whichever way it is kept. */
export function textsOf(column: SourceColumn, rows: number): TextColumn {
  if (column.kind === 'texts') return column;
  const places = new Map<string, number>();
  const codes = new Uint32Array(rows);
  for (let row = 0; row < rows; row++) {
    const value = column.values[row];
    const text = Number.isNaN(value) ? (column.exceptions?.get(row) ?? '') : String(value);
    let code = places.get(text);
    if (code === undefined) {
      code = places.size;
      places.set(text, code);
    }
    codes[row] = code;
  }
  return { kind: 'texts', codes, texts: [...places.keys()] };
}
