import type { Fine, SlotCounts } from '@tallystone/contracts/binnings/bins';
import type { BinnedCharacteristic, DataReading, NumericCharacteristic } from '@tallystone/contracts/specification/types';
import { fineEdgesOfCounts } from '@tallystone/numeric/binning/fine-classes';
import { slotCount } from '@tallystone/numeric/bench';
import { codeCharacteristics } from '../replay/coding';
import { Columns } from '../replay/columns';
import { ReplayError } from '../replay/problems';
import { type ColumnSource, type TextColumn, textsOf } from '../replay/source';
import { DEVELOPMENT, HOLD_OUT, NO_BIN, OUT, OUT_OF_TIME, type Prepared } from '../replay/types';

/** Who is in the sample and as what: as much of `Prepared` as counting needs. */
export type CountedRows = Pick<Prepared, 'rows' | 'partition' | 'outcome' | 'weights'>;

/** One column as its sample defines it. */
export interface DefinedCharacteristic {
  readonly column: string;
  readonly kind: 'numeric' | 'categorical';
  readonly special: readonly { readonly label: string; readonly values: readonly (number | string)[] }[];
}

/** A byte holds 250 codes; special codes and missing need theirs. */
export const mostCategories = 240;

export class TooManyCategories extends Error {
  constructor(readonly categories: number) {
    super(
      `It has ${categories} different values in development; at most ${mostCategories} can be classed. Group them before the file is brought in.`,
    );
  }
}

export interface FineClassing {
  readonly fine: Fine;
  /** Apart from `fine`, where it is null: these figures are covered until somebody opens them. */
  readonly outOfTime: SlotCounts;
}

/**
 * Fine classes of a characteristic with goods and bads by partition. Cuts come from known values of development rows with a good or bad
 * outcome; every category of those rows is a class.
 *
 * @throws ReplayError for values that are no numbers; TooManyCategories
 */
export function fineClasses(
  defined: DefinedCharacteristic,
  source: ColumnSource,
  data: DataReading,
  counted: CountedRows,
  fineClassCount: number,
): FineClassing {
  if (defined.kind === 'categorical') {
    const categories = categoriesOf(defined, source, data, counted);
    return countSlots(defined, source, data, counted, { edges: [], categories, range: null });
  }
  const { values, rows } = knownValues(defined, source, data, counted);
  const edges = values.length > 0 ? fineEdgesOfCounts(values, rows, fineClassCount) : [];
  let range: [number, number] | null = null;
  for (const value of values) range = range ? [Math.min(range[0], value), Math.max(range[1], value)] : [value, value];
  return countSlots(defined, source, data, counted, { edges, categories: [], range });
}

/** The same fine classes with more edges, counted anew from the column. */
export function splitFineClasses(
  defined: DefinedCharacteristic,
  source: ColumnSource,
  data: DataReading,
  counted: CountedRows,
  fine: Fine,
  more: readonly number[],
): FineClassing {
  const edges = [...new Set([...fine.edges, ...more])].sort((a, b) => a - b);
  return countSlots(defined, source, data, counted, { edges, categories: [], range: fine.range });
}

/** A specification entry whose bins are the fine classes, so that the chain itself gives each row its slot. */
export function fineEntry(
  defined: DefinedCharacteristic,
  edges: readonly number[],
  categories: readonly string[],
): BinnedCharacteristic {
  const base = { column: defined.column, penaltyMultiplier: 1, lower: null, upper: null, coding: 'woe', missing: 'own' } as const;
  const special = defined.special.map(({ label, values }) => ({ label, values: [...values], bin: 'own' as const }));
  if (defined.kind === 'numeric') {
    const numbers = special as NumericCharacteristic['special'];
    return { ...base, kind: 'numeric', edges: [...edges], closed: 'left', special: numbers, classing: { made: 'by hand' } };
  }
  const texts = special.map((code) => ({ ...code, values: code.values.map(String) }));
  return {
    ...base,
    kind: 'categorical',
    groups: categories.map((category) => [category]),
    special: texts,
    unseen: 'neutral',
    classing: { made: 'by hand' },
  };
}

function countSlots(
  defined: DefinedCharacteristic,
  source: ColumnSource,
  data: DataReading,
  counted: CountedRows,
  classes: Pick<Fine, 'edges' | 'categories' | 'range'>,
): FineClassing {
  const entry = fineEntry(defined, classes.edges, classes.categories);
  const column = textColumn(defined, source, counted);
  const empty: Fine = {
    kind: defined.kind,
    ...classes,
    closed: 'left',
    special: defined.special.map(({ label }) => label),
    development: { rows: [], goods: [], bads: [] },
    holdOut: { rows: [], goods: [], bads: [] },
    outOfTime: null,
  };
  const slots = slotCount(empty);
  const count = (): SlotCounts => ({ rows: zeros(slots), goods: zeros(slots), bads: zeros(slots) });
  const [development, holdOut, outOfTime] = [count(), count(), count()];
  if (column) {
    const slotOf = slotsOfTexts(defined, entry, column, data, counted, source, slots);
    const tally = tallyTexts(column, counted);
    for (const [part, counts] of [
      [DEVELOPMENT, development],
      [HOLD_OUT, holdOut],
      [OUT_OF_TIME, outOfTime],
    ] as const) {
      for (let text = 0; text < column.texts.length; text++) {
        const slot = slotOf[text];
        const at = text * groups + 2 * (part - 1);
        counts.rows[slot] += tally.rows[at] + tally.rows[at + 1];
        counts.goods[slot] += tally.weights[at + 1];
        counts.bads[slot] += tally.weights[at];
      }
    }
  }
  return { fine: { ...empty, development, holdOut }, outOfTime };
}

/** Partition by outcome: what rows of one text are told apart by. */
const groups = 6;

interface Tally {
  /** By text, then by partition (development, hold-out, out-of-time), bads before goods. */
  readonly rows: Uint32Array | Float64Array;
  readonly weights: Uint32Array | Float64Array;
}

/**
 * Rows and weights of each different text by partition and outcome: the one pass over the rows. All that follows works on the texts, of which
 * there are few.
 */
function tallyTexts(column: TextColumn, { partition, outcome, weights }: CountedRows): Tally {
  const { codes } = column;
  const rows = new Uint32Array(column.texts.length * groups);
  const sums = weights ? new Float64Array(rows.length) : rows;
  for (let row = 0; row < codes.length; row++) {
    // Partitions count from 1, 0 is out; outcome 0 is bad, 1 good, anything else is not counted.
    if (partition[row] === OUT || outcome[row] > 1) continue;
    const at = codes[row] * groups + 2 * (partition[row] - 1) + outcome[row];
    rows[at]++;
    if (weights) sums[at] += weights[row];
  }
  return { rows, weights: sums };
}

/** The slot of each text. A category that no class has is one that development has not seen: the last slot is theirs. */
export function slotsOfTexts(
  defined: DefinedCharacteristic,
  entry: BinnedCharacteristic,
  column: TextColumn,
  data: DataReading,
  counted: CountedRows,
  source: ColumnSource,
  slots: number,
): Uint8Array {
  return codesOfTexts(defined, entry, column, data, counted, source).map((code) => (code === NO_BIN ? slots - 1 : code));
}

/**
 * The code that the chain gives each text, from the chain itself: rows of equal text have equal codes, so a sample with one row for each text
 * says all of them. Texts of rows that are out alone are not judged.
 */
function codesOfTexts(
  defined: DefinedCharacteristic,
  entry: BinnedCharacteristic,
  column: TextColumn,
  data: DataReading,
  counted: CountedRows,
  source: ColumnSource,
): Uint8Array {
  const texts = column.texts.length;
  const partition = new Uint8Array(texts).fill(OUT);
  for (let row = 0; row < counted.rows; row++) if (counted.partition[row] !== OUT) partition[column.codes[row]] = DEVELOPMENT;
  const each: TextColumn = { kind: 'texts', codes: Uint32Array.from({ length: texts }, (_, text) => text), texts: column.texts };
  const ofTexts: ColumnSource = { rows: texts, column: (name) => (name === defined.column ? each : undefined) };
  const coding = { data, characteristics: [entry] };
  try {
    const [coded] = codeCharacteristics(coding, ofTexts, { rows: texts, partition }).characteristics;
    return coded.codes ?? new Uint8Array(texts);
  } catch (error) {
    // The same problems, told with the number of rows that have them.
    if (error instanceof ReplayError) codeCharacteristics(coding, source, counted);
    throw error;
  }
}

export function textColumn(defined: DefinedCharacteristic, source: ColumnSource, counted: CountedRows): TextColumn | null {
  const column = source.column(defined.column);
  return column ? textsOf(column, counted.rows) : null;
}

/** The different known values of development rows with a good or bad outcome, with the number of rows of each. */
function knownValues(
  defined: DefinedCharacteristic,
  source: ColumnSource,
  data: DataReading,
  counted: CountedRows,
): { values: Float64Array; rows: Float64Array } {
  const column = textColumn(defined, source, counted);
  if (!column) return { values: new Float64Array(0), rows: new Float64Array(0) };
  const each: ColumnSource = {
    rows: column.texts.length,
    column: () => ({ kind: 'texts', codes: Uint32Array.from(column.texts, (_, text) => text), texts: column.texts }),
  };
  const numbers = new Columns(each, data).numbers(defined.column);
  const special = new Set(defined.special.flatMap(({ values }) => values.map(Number)));
  const tally = tallyTexts(column, counted);
  const values: number[] = [];
  const rows: number[] = [];
  for (let text = 0; numbers && text < column.texts.length; text++) {
    const developed = tally.rows[text * groups] + tally.rows[text * groups + 1];
    const value = developed > 0 ? numbers.number(text) : NaN;
    if (Number.isNaN(value) || special.has(value)) continue;
    values.push(value);
    rows.push(developed);
  }
  return { values: Float64Array.from(values), rows: Float64Array.from(rows) };
}

/** By falling number of development rows, so that what matters stands first; equal ones by their text. */
function categoriesOf(defined: DefinedCharacteristic, source: ColumnSource, data: DataReading, counted: CountedRows): string[] {
  const columns = new Columns(source, data);
  const column = columns.text(defined.column);
  if (!column) return [];
  const special = new Set(defined.special.flatMap(({ values }) => values.map(String)));
  const tally = tallyTexts(column, counted);
  const categories = column.texts
    .map((text, code) => ({ text, rows: tally.rows[code * groups] + tally.rows[code * groups + 1] }))
    .filter(({ text, rows }) => rows > 0 && !columns.isMissing(text) && !special.has(text))
    .sort((a, b) => b.rows - a.rows || (a.text < b.text ? -1 : 1));
  if (categories.length > mostCategories) throw new TooManyCategories(categories.length);
  return categories.map(({ text }) => text);
}

const zeros = (length: number): number[] => new Array<number>(length).fill(0);
