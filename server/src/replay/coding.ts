import { binOf } from '@tallystone/numeric';
import type {
  CategoricalCharacteristic,
  Characteristic,
  LinearCharacteristic,
  NumericCharacteristic,
  Specification,
} from '@tallystone/contracts/specification/types';
import { binsOf, joins } from './bins';
import { Columns } from './columns';
import { refuse, ValueCounts, type ReplayProblem } from './problems';
import type { ColumnSource } from './source';
import { NO_BIN, OUT, type CodedCharacteristic, type CodeMatrix, type Prepared } from './types';

/**
 * Gives every row in the sample its bin in every characteristic: one byte per row and characteristic, NO_BIN for an unseen
 * category and for rows that are out.
 *
 * @param spec needs `data` and `characteristics` only
 * @throws ReplayError with the problems of all characteristics: values that are no number, refused missing values, missing columns
 * @example const coded = codeCharacteristics(specification, source, prepared); coded.characteristics[0].codes
 */
export function codeCharacteristics(
  spec: Pick<Specification, 'data' | 'characteristics'>,
  source: ColumnSource,
  prepared: Pick<Prepared, 'rows' | 'partition'>,
): CodeMatrix {
  const columns = new Columns(source, spec.data);
  const problems: ReplayProblem[] = [];
  const characteristics = spec.characteristics.map((characteristic) =>
    code(characteristic, columns, prepared.partition, problems),
  );
  refuse([...columns.problems, ...problems]);
  return { rows: prepared.rows, characteristics };
}

function code(
  characteristic: Characteristic,
  columns: Columns,
  partition: Uint8Array,
  problems: ReplayProblem[],
): CodedCharacteristic {
  if (characteristic.coding === 'linear') return codeLinear(characteristic, columns, partition, problems);
  return characteristic.kind === 'numeric'
    ? codeNumeric(characteristic, columns, partition, problems)
    : codeCategorical(characteristic, columns, partition, problems);
}

/** Notes what is wrong with a characteristic's values. */
class Faults {
  private readonly values = new ValueCounts();
  private missing = 0;

  constructor(private readonly column: string) {}

  value(text: string): void {
    this.values.add(text);
  }

  missingValue(): void {
    this.missing++;
  }

  report(problems: ReplayProblem[]): void {
    const { column } = this;
    const problem = this.values.problem(
      'not-a-number',
      column,
      (listed, rows) =>
        `"${column}" has ${rows} value${rows === 1 ? ' that is no number' : 's that are no numbers'}, neither missing nor special: ${listed}.`,
    );
    if (problem !== null) problems.push(problem);
    if (this.missing > 0) {
      const message = `"${column}" is missing in ${this.missing} row${this.missing === 1 ? '' : 's'}, which the specification refuses.`;
      problems.push({ code: 'refused-missing', message, where: { column, count: this.missing } });
    }
  }
}

function codeNumeric(
  characteristic: NumericCharacteristic,
  columns: Columns,
  partition: Uint8Array,
  problems: ReplayProblem[],
): CodedCharacteristic {
  const bins = binsOf(characteristic);
  const codes = new Uint8Array(columns.rows).fill(NO_BIN);
  const faults = new Faults(characteristic.column);
  const { special, missing } = joins(characteristic);
  const specialBin = new Map(
    characteristic.special.flatMap((entry, index) =>
      entry.values.map((value) => [value === 0 ? 0 : value, special[index]] as const),
    ),
  );
  for (const code of specialBin.keys()) {
    if (typeof code === 'number' || !columns.isNumber(code)) continue;
    const message = `"${characteristic.column}": the special code ${JSON.stringify(code)} is a number as the file is read. State it as one.`;
    problems.push({ code: 'special-is-number', message, where: { column: characteristic.column } });
  }
  const { edges, closed } = characteristic;
  const binOfValue =
    specialBin.size === 0
      ? (value: number) => binOf(value, edges, closed)
      : (value: number) => specialBin.get(value) ?? binOf(value, edges, closed);
  const column = columns.raw(characteristic.column);
  const view = columns.numbers(characteristic.column);
  if (column !== null && view !== null) {
    const judge = (row: number): number => {
      const value = view.number(row);
      if (!Number.isNaN(value)) return binOfValue(value);
      if (!view.missing(row)) {
        const text = view.text(row);
        const bin = specialBin.get(text);
        if (bin !== undefined) return bin;
        faults.value(text);
      } else if (missing === null) faults.missingValue();
      else return missing;
      return NO_BIN;
    };
    if (column.kind === 'texts') {
      // One search per distinct text; only rows with something to say go through `judge`.
      const known = new Int16Array(column.texts.length).fill(-1);
      for (let row = 0; row < codes.length; row++) {
        if (partition[row] === OUT) continue;
        const text = column.codes[row];
        if (known[text] >= 0) codes[row] = known[text];
        else {
          codes[row] = judge(row);
          if (codes[row] !== NO_BIN) known[text] = codes[row];
        }
      }
    } else {
      for (let row = 0; row < codes.length; row++) if (partition[row] !== OUT) codes[row] = judge(row);
    }
  }
  faults.report(problems);
  return { characteristic, bins, codes, values: null };
}

function codeCategorical(
  characteristic: CategoricalCharacteristic,
  columns: Columns,
  partition: Uint8Array,
  problems: ReplayProblem[],
): CodedCharacteristic {
  const bins = binsOf(characteristic);
  const codes = new Uint8Array(columns.rows).fill(NO_BIN);
  const faults = new Faults(characteristic.column);
  const column = columns.text(characteristic.column);
  if (column !== null) {
    const { special, missing } = joins(characteristic);
    const listed = new Map<string, number>([
      ...characteristic.groups.flatMap((group, index) => group.map((text) => [text, index] as const)),
      ...characteristic.special.flatMap((entry, index) => entry.values.map((text) => [text, special[index]] as const)),
    ]);
    const unseen = characteristic.unseen === 'neutral' ? NO_BIN : characteristic.unseen;
    const refused = Uint8Array.from(column.texts, (text) => (columns.isMissing(text) && missing === null ? 1 : 0));
    const byText = Uint8Array.from(column.texts, (text) =>
      columns.isMissing(text) ? (missing ?? NO_BIN) : (listed.get(text) ?? unseen),
    );
    for (let row = 0; row < codes.length; row++) {
      if (partition[row] === OUT) continue;
      const text = column.codes[row];
      codes[row] = byText[text];
      if (refused[text] === 1) faults.missingValue();
    }
  }
  faults.report(problems);
  return { characteristic, bins, codes, values: null };
}

function codeLinear(
  characteristic: LinearCharacteristic,
  columns: Columns,
  partition: Uint8Array,
  problems: ReplayProblem[],
): CodedCharacteristic {
  const values = new Float64Array(columns.rows).fill(NaN);
  const faults = new Faults(characteristic.column);
  const view = columns.numbers(characteristic.column);
  if (view !== null) {
    for (let row = 0; row < values.length; row++) {
      if (partition[row] === OUT) continue;
      values[row] = view.number(row);
      if (!Number.isNaN(values[row])) continue;
      if (view.missing(row)) faults.missingValue();
      else faults.value(view.text(row));
    }
  }
  faults.report(problems);
  return { characteristic, bins: [], codes: null, values };
}
