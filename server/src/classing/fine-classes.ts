import type { Fine, SlotCounts } from '@tallystone/contracts/binnings/bins';
import type { BinnedCharacteristic, DataReading, NumericCharacteristic } from '@tallystone/contracts/specification/types';
import { fineEdges } from '@tallystone/numeric/binning/fine-classes';
import { slotCount } from '@tallystone/numeric/bench';
import { codeCharacteristics } from '../replay/coding';
import { Columns } from '../replay/columns';
import type { ColumnSource } from '../replay/source';
import { BAD, DEVELOPMENT, GOOD, HOLD_OUT, NO_BIN, OUT_OF_TIME, type Prepared } from '../replay/types';

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
  const values = knownValues(defined, source, data, counted);
  const edges = values.length > 0 ? fineEdges(values, fineClassCount) : [];
  let range: [number, number] | null = null;
  for (const value of values) range = range ? [Math.min(range[0], value), Math.max(range[1], value)] : [value, value];
  return countSlots(defined, source, data, counted, { edges, categories: [], range });
}

/** The same fine classes with one more edge, counted anew from the column. */
export function splitFineClass(
  defined: DefinedCharacteristic,
  source: ColumnSource,
  data: DataReading,
  counted: CountedRows,
  fine: Fine,
  edge: number,
): FineClassing {
  const edges = [...new Set([...fine.edges, edge])].sort((a, b) => a - b);
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
  const [coded] = codeCharacteristics(
    { data, characteristics: [fineEntry(defined, classes.edges, classes.categories)] },
    source,
    counted,
  ).characteristics;
  const codes = coded.codes ?? new Uint8Array(0);
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
  const parts: (SlotCounts | null)[] = [null, count(), count(), count()];
  for (let row = 0; row < counted.rows; row++) {
    const part = parts[counted.partition[row]];
    const outcome = counted.outcome[row];
    if (!part || (outcome !== GOOD && outcome !== BAD)) continue;
    // A category that no class has: development has not seen it. The last slot is theirs.
    const slot = codes[row] === NO_BIN ? slots - 1 : codes[row];
    part.rows[slot] += 1;
    part[outcome === GOOD ? 'goods' : 'bads'][slot] += counted.weights ? counted.weights[row] : 1;
  }
  return { fine: { ...empty, development: parts[DEVELOPMENT]!, holdOut: parts[HOLD_OUT]! }, outOfTime: parts[OUT_OF_TIME]! };
}

function knownValues(
  defined: DefinedCharacteristic,
  source: ColumnSource,
  data: DataReading,
  counted: CountedRows,
): Float64Array {
  const numbers = new Columns(source, data).numbers(defined.column);
  const special = new Set(defined.special.flatMap(({ values }) => values.map(Number)));
  const known = new Float64Array(counted.rows);
  let found = 0;
  for (let row = 0; numbers && row < counted.rows; row++) {
    if (!isDeveloped(counted, row)) continue;
    const value = numbers.number(row);
    if (!Number.isNaN(value) && !special.has(value)) known[found++] = value;
  }
  return known.slice(0, found);
}

/** By falling number of development rows, so that what matters stands first; equal ones by their text. */
function categoriesOf(defined: DefinedCharacteristic, source: ColumnSource, data: DataReading, counted: CountedRows): string[] {
  const columns = new Columns(source, data);
  const column = columns.text(defined.column);
  if (!column) return [];
  const special = new Set(defined.special.flatMap(({ values }) => values.map(String)));
  const seen = new Map<number, number>();
  for (let row = 0; row < counted.rows; row++) {
    if (isDeveloped(counted, row)) seen.set(column.codes[row], (seen.get(column.codes[row]) ?? 0) + 1);
  }
  const categories = [...seen]
    .map(([code, rows]) => ({ text: column.texts[code], rows }))
    .filter(({ text }) => !columns.isMissing(text) && !special.has(text))
    .sort((a, b) => b.rows - a.rows || (a.text < b.text ? -1 : 1));
  if (categories.length > mostCategories) throw new TooManyCategories(categories.length);
  return categories.map(({ text }) => text);
}

const isDeveloped = (counted: CountedRows, row: number): boolean =>
  counted.partition[row] === DEVELOPMENT && (counted.outcome[row] === GOOD || counted.outcome[row] === BAD);

const zeros = (length: number): number[] => new Array<number>(length).fill(0);
