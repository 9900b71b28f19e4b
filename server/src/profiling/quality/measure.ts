import type { ColumnQualityDetail, QualityGroup } from '@tallystone/contracts/samples/quality';
import { quantileOfSorted } from '@tallystone/numeric';
import { cutLabels } from '../../replay/bins';
import { NO_MONTH } from '../../replay/row-months';
import { allOthers, groupsOfNumbers, mostFrequent, placeAmong } from '../value-groups';
import { type ColumnValues, MISSING, SPECIAL, UNREADABLE, VALUE } from './read-column';

/** What is known of each row beside the column itself. */
export interface RowFacts {
  /** 1 good, 0 bad, anything else not known; rows of out-of-time are never known. */
  readonly outcome: Uint8Array;
  /** Place of the month of application, `NO_MONTH` without one; null where no column says it. */
  readonly month: Uint16Array | null;
  readonly months: number;
  /** The first so many months are what others are compared with; 0 = there is nothing to compare. */
  readonly baselineMonths: number;
}

/** Everything that is counted in one column; what it means is said in judge.ts. */
export interface ColumnMeasure {
  readonly missing: number;
  readonly special: number;
  readonly unreadable: number;
  readonly quantiles: { share: number; value: number }[] | null;
  readonly outliers: { below: number; above: number; lower: number; upper: number } | null;
  /** How far the furthest value lies beyond its quartile, in interquartile ranges. */
  readonly furthest: { value: number; ranges: number } | null;
  readonly groups: QualityGroup[];
  readonly histogram: ColumnQualityDetail['histogram'];
  /** By month: rows by group. */
  readonly months: number[][];
}

const quantileShares = [0, 0.01, 0.05, 0.25, 0.5, 0.75, 0.95, 0.99, 1];
const bars = 20;
/** Outer fences: 3 interquartile ranges beyond the quartiles (J. W. Tukey, Exploratory Data Analysis, 1977, from memory). */
const fence = 3;

export function measureColumn(values: ColumnValues, facts: RowFacts, specialLabels: readonly string[]): ColumnMeasure {
  const rows = values.state.length;
  const states = new Float64Array(SPECIAL + specialLabels.length);
  for (let row = 0; row < rows; row++) states[values.state[row]]++;
  const sorted = values.numbers ? sortedNumbers(values, states[VALUE]) : null;
  const { group, groups } = groupRows(values, facts, specialLabels, sorted);
  const months = Array.from({ length: facts.months }, () => new Array<number>(groups.length).fill(0));
  for (let row = 0; row < rows; row++) {
    const place = group[row];
    const entry = groups[place];
    entry.rows++;
    if (facts.outcome[row] === 1) entry.goods++;
    else if (facts.outcome[row] === 0) entry.bads++;
    else entry.unknown++;
    if (facts.month && facts.month[row] !== NO_MONTH) months[facts.month[row]][place]++;
  }
  const kept = groups.map(({ rows: size }, place) => ({ size, place })).filter(({ size }) => size > 0);
  return {
    missing: states[MISSING],
    special: states.subarray(SPECIAL).reduce((sum, count) => sum + count, 0),
    unreadable: states[UNREADABLE],
    quantiles: sorted && sorted.length > 0 ? quantileShares.map((share) => ({ share, value: quantileOfSorted(sorted, share) })) : null,
    ...outliersOf(sorted),
    groups: kept.map(({ place }) => groups[place]),
    histogram: sorted && sorted.length > 0 ? histogramOf(values, facts, sorted) : null,
    months: months.map((counts) => kept.map(({ place }) => counts[place])),
  };
}

function sortedNumbers({ state, numbers }: ColumnValues, count: number): Float64Array {
  const all = new Float64Array(count);
  let length = 0;
  if (numbers) for (let row = 0; row < state.length; row++) if (state[row] === VALUE) all[length++] = numbers[row];
  return all.sort();
}

function outliersOf(sorted: Float64Array | null): Pick<ColumnMeasure, 'outliers' | 'furthest'> {
  if (!sorted || sorted.length === 0) return { outliers: null, furthest: null };
  const [first, third] = [quantileOfSorted(sorted, 0.25), quantileOfSorted(sorted, 0.75)];
  const range = third - first;
  if (!(range > 0)) return { outliers: null, furthest: null };
  const [lower, upper] = [first - fence * range, third + fence * range];
  let below = 0;
  while (below < sorted.length && sorted[below] < lower) below++;
  let above = 0;
  while (above < sorted.length && sorted[sorted.length - 1 - above] > upper) above++;
  const low = (first - sorted[0]) / range;
  const high = (sorted[sorted.length - 1] - third) / range;
  const furthest = high >= low ? { value: sorted[sorted.length - 1], ranges: high } : { value: sorted[0], ranges: low };
  return { outliers: { below, above, lower, upper }, furthest };
}

interface Grouped {
  readonly group: Uint8Array;
  readonly groups: { label: string; kind: QualityGroup['kind']; rows: number; goods: number; bads: number; unknown: number }[];
}

function groupRows(
  values: ColumnValues,
  facts: RowFacts,
  specialLabels: readonly string[],
  sorted: Float64Array | null,
): Grouped {
  const groups: Grouped['groups'] = [];
  const add = (label: string, kind: QualityGroup['kind']): number =>
    groups.push({ label, kind, rows: 0, goods: 0, bads: 0, unknown: 0 }) - 1;
  const rows = values.state.length;
  const group = new Uint8Array(rows);
  let placeOfRow: (row: number) => number;
  if (values.numbers && sorted) {
    const { numbers } = values;
    const cuts = cutsOf(values, facts, sorted);
    cuts.labels.forEach((label) => add(label, 'values'));
    placeOfRow = (row) => placeAmong(cuts.edges, numbers[row]);
  } else if (values.codes) {
    const { codes } = values;
    const places = placesOfTexts(values, add);
    placeOfRow = (row) => places[codes[row]];
  } else {
    const known = add('a value', 'values');
    placeOfRow = () => known;
  }
  const unreadable = add('no number', 'other');
  const special = specialLabels.map((label) => add(label, 'special'));
  const missing = add('missing', 'missing');
  for (let row = 0; row < rows; row++) {
    const state = values.state[row];
    if (state === VALUE) group[row] = placeOfRow(row);
    else if (state === MISSING) group[row] = missing;
    else group[row] = state === UNREADABLE ? unreadable : special[state - SPECIAL];
  }
  return { group, groups };
}

/** A group for each of a few values, else of about equal size in the months that others are compared with. */
function cutsOf(values: ColumnValues, facts: RowFacts, sorted: Float64Array): { edges: number[]; labels: string[] } {
  const few: number[] = [];
  for (let place = 0; place < sorted.length && few.length <= groupsOfNumbers; place++)
    if (place === 0 || sorted[place] !== sorted[place - 1]) few.push(sorted[place]);
  if (few.length <= groupsOfNumbers) return { edges: few.slice(1), labels: few.map(String) };
  const base = facts.baselineMonths > 0 ? baseNumbers(values, facts) : sorted;
  const cuts = new Set<number>();
  const from = base.length > 0 ? base : sorted;
  for (let k = 1; k < groupsOfNumbers; k++) {
    // A cut is a value that stands there, so that it can be read.
    const cut = from[Math.floor((k * from.length) / groupsOfNumbers)];
    if (cut > sorted[0]) cuts.add(cut);
  }
  const edges = [...cuts].sort((a, b) => a - b);
  // All of them one value in the first year: whatever is beyond it is the other group.
  return { edges, labels: cutLabels(edges, 'left') };
}

function baseNumbers({ state, numbers }: ColumnValues, { month, baselineMonths }: RowFacts): Float64Array {
  const base: number[] = [];
  if (numbers && month)
    for (let row = 0; row < state.length; row++) if (state[row] === VALUE && month[row] < baselineMonths) base.push(numbers[row]);
  return Float64Array.from(base).sort();
}

function placesOfTexts(
  { codes, texts, state }: ColumnValues,
  add: (label: string, kind: QualityGroup['kind']) => number,
): Uint8Array {
  const counts = new Float64Array(texts.length);
  if (codes) for (let row = 0; row < state.length; row++) if (state[row] === VALUE) counts[codes[row]]++;
  const shown = mostFrequent([...texts.keys()], counts, texts);
  const places = new Uint8Array(texts.length);
  for (const code of shown) places[code] = add(texts[code].slice(0, 60), 'values');
  if (texts.length > shown.length) {
    const named = new Set(shown);
    const other = add(allOthers, 'other');
    for (const code of texts.keys()) if (!named.has(code)) places[code] = other;
  }
  return places;
}

/** Bars of equal width between the first and the ninety-ninth hundredth, so that a few far values do not hide all others. */
function histogramOf({ state, numbers }: ColumnValues, { outcome }: RowFacts, sorted: Float64Array): ColumnMeasure['histogram'] {
  let [low, high] = [quantileOfSorted(sorted, 0.01), quantileOfSorted(sorted, 0.99)];
  if (low === high) [low, high] = [sorted[0], sorted[sorted.length - 1]];
  if (!numbers || low === high) return null;
  const empty = (): number[] => new Array<number>(bars).fill(0);
  const [goods, bads, unknown] = [empty(), empty(), empty()];
  for (let row = 0; row < state.length; row++) {
    if (state[row] !== VALUE) continue;
    const bar = Math.max(0, Math.min(bars - 1, Math.floor(((numbers[row] - low) / (high - low)) * bars)));
    (outcome[row] === 1 ? goods : outcome[row] === 0 ? bads : unknown)[bar]++;
  }
  const edges = Array.from({ length: bars + 1 }, (_, k) => (k === bars ? high : low + ((high - low) * k) / bars));
  return { edges, goods, bads, unknown };
}
