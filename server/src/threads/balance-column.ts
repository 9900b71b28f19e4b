import { populationStability, stabilityCriticalValue, stabilitySampling } from '@tallystone/numeric';
import type { BalanceReading, CharacteristicBalance } from '@tallystone/contracts/samples/balance';
import type { DefinedColumn } from '@tallystone/contracts/samples/definition';
import type { DataReading } from '@tallystone/contracts/specification/types';
import { allOthers, groupsOfNumbers, mostFrequent, placeAmong } from '../profiling/value-groups';
import { cutLabels } from '../replay/bins';
import { Columns } from '../replay/columns';
import { type SourceColumn, type TextColumn, textsOf } from '../replay/source';
import { BAD, DEVELOPMENT, GOOD, HOLD_OUT, OUT_OF_TIME, type Prepared } from '../replay/types';
import type { Task } from './task';

export interface BalancePayload {
  readonly column: Pick<DefinedColumn, 'column' | 'kind' | 'special'>;
  readonly source: SourceColumn;
  readonly data: DataReading;
  readonly prepared: Pick<Prepared, 'partition' | 'outcome'>;
}

/** Under this many rows expected in a class on either side, it is put together with the other small ones. */
const fewExpected = 5;
const level = 0.95;

/**
 * How differently one characteristic is spread in hold-out and in out-of-time, against development: the stability index over deciles of development (or
 * its categories), every special code and missing in a class of its own. It sees rows with a good or bad outcome, as fit and metrics do, and looks at no
 * outcome beyond that.
 */
export const balanceColumn: Task<BalancePayload, CharacteristicBalance> = ({ column, source, data, prepared }) => {
  const texts = textsOf(source, prepared.partition.length);
  const byText = countsByText(texts, prepared);
  const { classOf, labels } = classesOf(column, texts, data, byText[DEVELOPMENT]);
  const counted = (partition: number): Float64Array => {
    const counts = new Float64Array(labels.length);
    byText[partition].forEach((rows, code) => (counts[classOf[code]] += rows));
    return counts;
  };
  const development = counted(DEVELOPMENT);
  return {
    column: column.column,
    holdOut: readBalance(labels, development, counted(HOLD_OUT)),
    outOfTime: readBalance(labels, development, counted(OUT_OF_TIME)),
  };
};

/** Rows with a known outcome by distinct text, for each partition. */
function countsByText({ codes, texts }: TextColumn, { partition, outcome }: BalancePayload['prepared']): Record<number, Float64Array> {
  const empty = (): Float64Array => new Float64Array(texts.length);
  const counts: Record<number, Float64Array> = { [DEVELOPMENT]: empty(), [HOLD_OUT]: empty(), [OUT_OF_TIME]: empty() };
  for (let row = 0; row < partition.length; row++) {
    if (outcome[row] !== GOOD && outcome[row] !== BAD) continue;
    const of = counts[partition[row]];
    if (of !== undefined) of[codes[row]]++;
  }
  return counts;
}

function classesOf(
  { column, kind, special }: BalancePayload['column'],
  { texts }: TextColumn,
  data: DataReading,
  development: Float64Array,
): { classOf: Uint16Array; labels: string[] } {
  // A column of the distinct texts alone, so that each is read once.
  const distinct = new Columns({ rows: texts.length, column: () => ({ kind: 'texts', codes: Uint32Array.from(texts.keys()), texts }) }, data);
  const numbers = kind === 'numeric' ? distinct.numbers(column) : null;
  const specialAt = (code: number): number =>
    special.findIndex(({ values }) => values.some((value) => (numbers === null ? value === texts[code] : value === numbers.number(code))));
  const labels = [...special.map(({ label }) => label), 'missing', 'no number'];
  const [missing, unreadable, first] = [special.length, special.length + 1, special.length + 2];
  const classOf = new Uint16Array(texts.length);
  const regular: number[] = [];
  texts.forEach((text, code) => {
    const at = specialAt(code);
    if (at >= 0) classOf[code] = at;
    else if (distinct.isMissing(text)) classOf[code] = missing;
    else if (numbers !== null && Number.isNaN(numbers.number(code))) classOf[code] = unreadable;
    else regular.push(code);
  });
  if (numbers !== null) {
    const value = (code: number): number => numbers.number(code);
    const edges = decileEdges(regular, value, development);
    labels.push(...cutLabels(edges, 'left'));
    for (const code of regular) classOf[code] = first + placeAmong(edges, value(code));
  } else {
    const frequent = mostFrequent(regular, development, texts);
    const place = new Map(frequent.map((code, index) => [code, index]));
    labels.push(...frequent.map((code) => texts[code]), allOthers);
    for (const code of regular) classOf[code] = first + (place.get(code) ?? frequent.length);
  }
  return { classOf, labels };
}

/** Lower-closed edges: each is the first value with at least k tenths of development below it. */
function decileEdges(codes: readonly number[], value: (code: number) => number, development: Float64Array): number[] {
  const ordered = [...codes].filter((code) => development[code] > 0).sort((a, b) => value(a) - value(b));
  const total = ordered.reduce((sum, code) => sum + development[code], 0);
  const edges: number[] = [];
  let below = 0;
  let next = 1;
  for (const code of ordered) {
    if (below >= (next * total) / groupsOfNumbers && below > 0) {
      if (edges.at(-1) !== value(code)) edges.push(value(code));
      while (below >= (next * total) / groupsOfNumbers) next++;
    }
    below += development[code];
  }
  return edges;
}

const sum = (values: ArrayLike<number>): number => Array.from(values).reduce((total, value) => total + value, 0);

/**
 * The index of one pair of partitions; null where one of them is empty. Small classes are put together by what both sides lead to expect of them, never
 * by what the compared side shows, so that a class that vanished is not hidden.
 *
 * @example readBalance(['a', 'b'], Float64Array.of(50, 50), Float64Array.of(40, 60)) // index 0.0405…, two classes
 */
export function readBalance(labels: readonly string[], development: Float64Array, compared: Float64Array): BalanceReading | null {
  const [rowsDevelopment, rows] = [sum(development), sum(compared)];
  if (rowsDevelopment === 0 || rows === 0) return null;
  const fewest = (place: number): number =>
    ((development[place] + compared[place]) * Math.min(rowsDevelopment, rows)) / (rowsDevelopment + rows);
  const present = [...labels.keys()].filter((place) => development[place] + compared[place] > 0);
  const apart = present.filter((place) => fewest(place) >= fewExpected);
  const together = present.filter((place) => !apart.includes(place));
  const expected = apart.map((place) => development[place]);
  const actual = apart.map((place) => compared[place]);
  const names = apart.map((place) => labels[place]);
  if (together.length > 0) {
    expected.push(together.reduce((total, place) => total + development[place], 0));
    actual.push(together.reduce((total, place) => total + compared[place], 0));
    names.push(together.length === 1 ? labels[together[0]] : 'small classes together');
  }
  if (names.length < 2) return { rows, index: 0, classes: names.length, smoothed: false, criticalValue: null, pValue: null, largest: null };
  // A class that one side lacks has no finite part: half a row is added to every count then, and said.
  const smoothed = expected.some((count, place) => (count === 0) !== (actual[place] === 0));
  const index = populationStability(expected, actual, smoothed ? 0.5 : 0) ?? 0;
  const shares = names.map((label, place) => ({ label, development: expected[place] / rowsDevelopment, compared: actual[place] / rows }));
  const [largest] = [...shares].sort((a, b) => Math.abs(b.compared - b.development) - Math.abs(a.compared - a.development));
  return {
    rows,
    index,
    classes: names.length,
    smoothed,
    criticalValue: stabilityCriticalValue(rowsDevelopment, rows, names.length, level),
    pValue: stabilitySampling(Math.max(0, index), rowsDevelopment, rows, names.length).pValue,
    largest,
  };
}
