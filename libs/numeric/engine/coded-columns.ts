import { requireSameLength, requireThat } from '../checks';
import type { Penalty } from '../penalised/problem';

/** A column of few different values: a code for each row, and the value of each code (weight of evidence, or 0 and 1). */
export interface CodedColumn {
  readonly kind: 'coded';
  /** n codes, each below `values.length`. */
  readonly codes: Uint8Array;
  /** At most 256 values. */
  readonly values: Float64Array;
}

/** A column that is used by its value. */
export interface LinearColumn {
  readonly kind: 'linear';
  /** n values. */
  readonly values: Float64Array;
}

export type EngineColumn = CodedColumn | LinearColumn;

/** `FitProblem` with columns as codes: a byte per row and column in place of eight. */
export interface CodedProblem {
  readonly columns: readonly EngineColumn[];
  /** n values, 1 good, 0 bad. */
  readonly outcome: Uint8Array;
  /** n values of at least 0; absent = 1 each. */
  readonly weights?: Float64Array;
  /** Added to eta, not fitted. */
  readonly offset?: Float64Array;
  readonly penalty: Penalty;
}

/** Above this many different values a column is used by its value. */
const MOST_VALUES = 250;
const SLOTS = 1024;

/**
 * Finds codes of columns that are given by value; columns with more than 250 different values become linear ones.
 * @param columns p arrays of n finite values
 * @example codedColumns([Float64Array.of(0.5, -0.2, 0.5)])[0] // codes 0, 1, 0; values 0.5, -0.2
 */
export function codedColumns(columns: readonly Float64Array[]): EngineColumn[] {
  return columns.map((column) => codeColumn(column) ?? { kind: 'linear', values: column });
}

/** Open addressing over the bits of the number; minus zero is zero. */
function codeColumn(column: Float64Array): CodedColumn | null {
  const slots = new Int16Array(SLOTS).fill(-1);
  const values: number[] = [];
  const codes = new Uint8Array(column.length);
  const number = new Float64Array(1);
  const halves = new Uint32Array(number.buffer);
  let last = NaN;
  let code = 0;
  for (let i = 0; i < column.length; i++) {
    const value = column[i] + 0;
    if (value !== last) {
      number[0] = value;
      let slot = Math.imul(halves[0] ^ Math.imul(halves[1], 0x9e3779b1), 0x85ebca6b) >>> 22;
      while (slots[slot] >= 0 && values[slots[slot]] !== value) slot = (slot + 1) & (SLOTS - 1);
      if (slots[slot] < 0) {
        if (values.length === MOST_VALUES) return null;
        slots[slot] = values.length;
        values.push(value);
      }
      code = slots[slot];
      last = value;
    }
    codes[i] = code;
  }
  return { kind: 'coded', codes, values: Float64Array.from(values) };
}

/** Checks what `requireProblem` checks of columns by value. */
export function requireColumns(columns: readonly EngineColumn[], rows: number): void {
  columns.forEach((column, j) => {
    requireSameLength(`column ${j}`, column.kind === 'coded' ? column.codes.length : column.values.length, rows);
    column.values.forEach((value) => requireThat(Number.isFinite(value), 'columns', `Column ${j} has the value ${value}.`));
    if (column.kind !== 'coded') return;
    requireThat(column.values.length <= 256, 'columns', `Column ${j} has ${column.values.length} values; 256 are possible.`);
    const most = column.codes.reduce((largest, code) => Math.max(largest, code), 0);
    requireThat(rows === 0 || most < column.values.length, 'columns', `Column ${j} has the code ${most} without a value.`);
  });
}
