import type { Fine, SlotCounts } from '@tallystone/contracts/binnings/bins';
import type { BinnedCharacteristic, DataReading } from '@tallystone/contracts/specification/types';
import { mostApart } from '@tallystone/numeric/binning/categories';
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

/** More different texts are a name or a number of something rather than categories. */
export const mostCategories = 2000;

/** What stands for the rarest categories where there are more than a byte has codes for. */
const rarer = 'rarer categories';

/** Most cuts of fine classes beside so many special codes: the classes between and around them, the codes and missing share the 250 codes. */
export const mostFineEdges = (special: number): number => 248 - special;

export class TooManyCategories extends Error {
  constructor(readonly categories: number) {
    super(
      `It has ${categories} different values in development; at most ${mostCategories} can be classed, the rarest of them as one. Group them before the file is brought in.`,
    );
  }
}

export interface FineClassing {
  readonly fine: Fine;
  /** Apart from `fine`, where it is null: these figures are covered until somebody opens them. */
  readonly outOfTime: SlotCounts;
}

/** With the slot of each of the column's texts, by which months are counted; null without a column. */
export interface SlottedFineClassing extends FineClassing {
  readonly slotOf: Uint8Array | null;
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
  tallied: TalliedColumn | null,
  fineClassCount: number,
): SlottedFineClassing {
  if (defined.kind === 'categorical') {
    const classes = categoryClasses(tallied ? categoriesOf(defined, data, tallied) : []);
    return countSlots(defined, source, data, counted, tallied, { edges: [], ...classes, range: null });
  }
  const { values, rows } = tallied ? knownValues(defined, data, tallied) : { values: [], rows: [] };
  const edges = values.length > 0 ? fineEdgesOfCounts(values, rows, fineClassCount) : [];
  let [least, most] = [Infinity, -Infinity];
  for (const value of values) {
    if (value < least) least = value;
    if (value > most) most = value;
  }
  const range: [number, number] | null = values.length > 0 ? [least, most] : null;
  return countSlots(defined, source, data, counted, tallied, { edges, categories: [], range });
}

/** The same fine classes with more edges, counted anew from the column. */
export function splitFineClasses(
  defined: DefinedCharacteristic,
  source: ColumnSource,
  data: DataReading,
  counted: CountedRows,
  tallied: TalliedColumn | null,
  fine: Fine,
  more: readonly number[],
): SlottedFineClassing {
  const here = new Set(fine.edges);
  const fresh = [...new Set(more)].filter((edge) => !here.has(edge));
  const ascending = (list: number[]): number[] => list.sort((a, b) => a - b);
  const edges = ascending([...fine.edges, ...fresh]);
  const splits = ascending([...(fine.splits ?? []), ...fresh]);
  return countSlots(defined, source, data, counted, tallied, { edges, ...(splits.length > 0 ? { splits } : {}), categories: [], range: fine.range });
}

/** A specification entry whose bins are the fine classes, so that the chain itself gives each row its slot. */
export function fineEntry(
  defined: DefinedCharacteristic,
  { edges, categories, pooled }: Pick<Fine, 'edges' | 'categories' | 'pooled'>,
): BinnedCharacteristic {
  const base = { column: defined.column, penaltyMultiplier: 1, lower: null, upper: null, coding: 'woe', missing: 'own' } as const;
  const special = defined.special.map(({ label, values }) => ({ label, values: [...values], bin: 'own' as const }));
  if (defined.kind === 'numeric') {
    return { ...base, kind: 'numeric', edges: [...edges], closed: 'left', special, classing: { made: 'by hand' } };
  }
  const texts = special.map((code) => ({ ...code, values: code.values.map(String) }));
  return {
    ...base,
    kind: 'categorical',
    groups: categories.map((category) => (category === pooled?.name ? [...pooled.categories] : [category])),
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
  tallied: TalliedColumn | null,
  classes: Pick<Fine, 'edges' | 'splits' | 'categories' | 'pooled' | 'range'>,
): SlottedFineClassing {
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
  const slotOf = tallied && slotsOfTexts(defined, tallied, data, counted, source, empty);
  const weighted = counted.weights !== null;
  const count = (): SlotCounts => ({ rows: zeros(slots), goods: zeros(slots), bads: zeros(slots), ...(weighted ? { badRows: zeros(slots) } : {}) });
  const [development, holdOut, outOfTime] = [count(), count(), count()];
  if (tallied && slotOf) {
    const { rows, weights } = tallied;
    for (const [part, counts] of [
      [DEVELOPMENT, development],
      [HOLD_OUT, holdOut],
      [OUT_OF_TIME, outOfTime],
    ] as const) {
      for (let text = 0; text < slotOf.length; text++) {
        const slot = slotOf[text];
        const at = text * groups + 2 * (part - 1);
        counts.rows[slot] += rows[at] + rows[at + 1];
        counts.goods[slot] += weights[at + 1];
        counts.bads[slot] += weights[at];
        if (counts.badRows) counts.badRows[slot] += rows[at];
      }
    }
  }
  return { fine: { ...empty, development, holdOut }, outOfTime, slotOf };
}

/** Partition by outcome: what rows of one text are told apart by. */
const groups = 6;

/** A column with what its rows come to for each of its different texts, of which there are few. */
export interface TalliedColumn {
  readonly column: TextColumn;
  /** By text, then by partition (development, hold-out, out-of-time), bads before goods. */
  readonly rows: Uint32Array | Float64Array;
  readonly weights: Uint32Array | Float64Array;
  /** By text: 1 where a row that is not out has it. */
  readonly present: Uint8Array;
}

/** The one pass over the rows: all that follows works on the texts. Null where the source has no such column. */
export function tallyColumn(
  defined: DefinedCharacteristic,
  source: ColumnSource,
  { rows: count, partition, outcome, weights }: CountedRows,
): TalliedColumn | null {
  const found = source.column(defined.column);
  if (!found) return null;
  const column = textsOf(found, count);
  const { codes } = column;
  const rows = new Uint32Array(column.texts.length * groups);
  const sums = weights ? new Float64Array(rows.length) : rows;
  const present = new Uint8Array(column.texts.length);
  for (let row = 0; row < codes.length; row++) {
    const where = partition[row];
    if (where === OUT) continue;
    const code = codes[row];
    present[code] = 1;
    // Partitions count from 1, 0 is out; outcome 0 is bad, 1 good, anything else is not counted.
    if (outcome[row] > 1) continue;
    const at = code * groups + 2 * (where - 1) + outcome[row];
    rows[at]++;
    if (weights) sums[at] += weights[row];
  }
  return { column, rows, weights: sums, present };
}

/** The slot of each text. A category that no class has is one that development has not seen: the last slot is theirs. */
export function slotsOfTexts(
  defined: DefinedCharacteristic,
  tallied: TalliedColumn,
  data: DataReading,
  counted: CountedRows,
  source: ColumnSource,
  fine: Pick<Fine, 'kind' | 'edges' | 'categories' | 'pooled' | 'special'>,
): Uint8Array {
  const unseen = slotCount(fine as Fine) - 1;
  const entry = fineEntry(defined, fine);
  return codesOfTexts(defined, entry, tallied, data, counted, source).map((code) => (code === NO_BIN ? unseen : code));
}

/**
 * The code that the chain gives each text, from the chain itself: rows of equal text have equal codes, so a sample with one row for each text
 * says all of them. Texts of rows that are out alone are not judged.
 */
function codesOfTexts(
  defined: DefinedCharacteristic,
  entry: BinnedCharacteristic,
  { column, present }: TalliedColumn,
  data: DataReading,
  counted: CountedRows,
  source: ColumnSource,
): Uint8Array {
  const texts = column.texts.length;
  const partition = present.map((one) => (one === 1 ? DEVELOPMENT : OUT));
  const each = eachText(column);
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

/** A column with one row for each different text. */
const eachText = ({ texts }: TextColumn): TextColumn => {
  const codes = new Uint32Array(texts.length);
  for (let text = 0; text < codes.length; text++) codes[text] = text;
  return { kind: 'texts', codes, texts };
};

/** The different known values of development rows with a good or bad outcome, with the number of rows of each. */
function knownValues(
  defined: DefinedCharacteristic,
  data: DataReading,
  { column, rows: tally }: TalliedColumn,
): { values: number[]; rows: number[] } {
  const each = eachText(column);
  const numbers = new Columns({ rows: column.texts.length, column: () => each }, data).numbers(defined.column);
  const special = new Set<number | string>(defined.special.flatMap(({ values }) => values));
  const values: number[] = [];
  const rows: number[] = [];
  for (let text = 0; numbers && text < column.texts.length; text++) {
    const developed = tally[text * groups] + tally[text * groups + 1];
    const value = developed > 0 ? numbers.number(text) : NaN;
    if (Number.isNaN(value) || special.has(value)) continue;
    values.push(value);
    rows.push(developed);
  }
  return { values, rows };
}

/** The most frequent categories each for itself; where there are too many for that, the rest as one under a name that no category has. */
function categoryClasses(categories: readonly string[]): Pick<Fine, 'categories' | 'pooled'> {
  if (categories.length <= mostApart + 1) return { categories: [...categories] };
  const apart = categories.slice(0, mostApart);
  const here = new Set(categories);
  let name = rarer;
  while (here.has(name)) name = `${name} *`;
  return { categories: [...apart, name], pooled: { name, categories: categories.slice(mostApart) } };
}

/** By falling number of development rows, so that what matters stands first; equal ones by their text. */
function categoriesOf(defined: DefinedCharacteristic, data: DataReading, { column, rows }: TalliedColumn): string[] {
  const missing = new Set(data.missing);
  const special = new Set(defined.special.flatMap(({ values }) => values.map(String)));
  const categories = column.texts
    .map((text, code) => ({ text, rows: rows[code * groups] + rows[code * groups + 1] }))
    .filter(({ text, rows: developed }) => developed > 0 && !missing.has(text) && !special.has(text))
    .sort((a, b) => b.rows - a.rows || (a.text < b.text ? -1 : 1));
  if (categories.length > mostCategories) throw new TooManyCategories(categories.length);
  return categories.map(({ text }) => text);
}

const zeros = (length: number): number[] => new Array<number>(length).fill(0);
