import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { numberReader } from '../reading/index';
import { leastNumber, textBase } from '../reading/plain/column-coder';
import { type NumberStyle, mostWhole, spell, spelled, valueOf, wholeOf } from '../reading/plain/number-style';
import type { UnpackedSegment } from '../storage/packedSegment';
import type { CountedNumbers } from './counted-numbers';
import { type Counted, judgeNumbers, thousandsFlag } from './kind';
import { type OutcomeCodes, leakageOfNumbers } from './leakage';
import { PersonalValues } from './personal-values';
import { describeColumn, mostListed } from './profile-column';
import { type SortedCounts, sortCounts } from './sorted-counts';

/**
 * The profile of a column of numbers from its packed segments, without making texts of the numbers: the same, to the last digit, as
 * `profileColumn` and `suspectLeakage` give for its texts. Null where that cannot be said beforehand (numbers spelled in two ways, fewer than 95
 * in 100 of them numbers), which is then for those.
 */
export function profileNumbers(
  name: string,
  position: number,
  segments: readonly UnpackedSegment[],
  choices: ReadingChoices,
  outcome: OutcomeCodes | null,
): ColumnProfile | null {
  const style = commonStyle(segments, choices);
  if (style === null) return null;
  const joined = join(segments, style, outcome);
  if (joined === null) return null;
  const all = sortCounts(joined.wholes, joined.outcome);
  const missing = new Set(['', ...choices.missing]);
  const { kept, tokens } = withoutMissing(all, missing, style);

  const reader = numberReader(choices);
  const others: (Counted & { goods: number; bads: number; value: number })[] = [];
  const missingCounts = { goods: tokens.goods, bads: tokens.bads };
  const missingTokens = [...tokens.list];
  for (const [text, { count, goods, bads }] of joined.texts) {
    if (missing.has(text)) {
      missingTokens.push({ value: text, count });
      missingCounts.goods += goods;
      missingCounts.bads += bads;
    } else others.push({ text, count, goods, bads, value: reader.read(text) });
  }
  const spelledOtherwise = others.filter(({ value }) => !Number.isNaN(value)).sort((a, b) => a.value - b.value);
  const numbers = merge(kept, spelledOtherwise, style);
  if (numbers === null || numbers.length === 0) return null;

  const notNumbers = others.filter(({ value }) => Number.isNaN(value));
  const total = kept.counts.reduce((sum, one) => sum + one, 0) + others.reduce((sum, { count }) => sum + count, 0);
  const judged = judgeNumbers(total, notNumbers, reader);
  if (judged === null) return null;
  const question = thousandsFlag(choices, (ask) => {
    for (const { text, count, value } of others) if (!Number.isNaN(value) && !ask(text, count)) return false;
    for (let place = 0; place < kept.length; place++)
      if (!ask(spell(kept.wholes[place], style), kept.counts[place])) return false;
    return true;
  });
  // Packed numbers have fewer digits than any of what is looked for.
  const values = new PersonalValues();
  for (const { text, count } of others) values.add(text, count);
  const profile = describeColumn({
    name,
    position,
    personal: null,
    writings: null,
    personalValues: values.found(),
    rows: joined.rows,
    missingTokens,
    kind: 'numeric',
    kindFlags: question === null ? judged.flags : [...judged.flags, question],
    distinct: kept.length + others.length,
    mostFrequent: mostFrequentNumbers(kept, style, others),
    numbers,
    date: null,
    text: null,
  });
  if (outcome && profile.suggestedRole === 'characteristic') {
    const flag = leakageOfNumbers([numbers, ...notNumbers.map(({ goods, bads }) => ({ length: 1, goods: [goods], bads: [bads] }))], missingCounts);
    if (flag) profile.flags.push(flag);
  } // prettier-ignore
  return profile;
}

/** The style in which the numbers of all segments are written: theirs, with the most decimals of any. Null where there is none. */
function commonStyle(segments: readonly UnpackedSegment[], choices: ReadingChoices): NumberStyle | null {
  if (choices.thousands === choices.decimal) return null;
  let common: NumberStyle | null = null;
  for (const { style } of segments) {
    if (style === null) continue;
    if (style.sign !== choices.decimal.charCodeAt(0)) return null;
    if (common !== null && common.least !== style.least) return null;
    common = common === null || style.most > common.most ? style : common;
  }
  return common;
}

interface Joined {
  readonly rows: number;
  /** Of the rows that hold numbers in the common style, with the outcome of each. */
  readonly wholes: Int32Array;
  readonly outcome: Uint8Array | null;
  /** All other texts, in the order in which they appear. */
  readonly texts: ReadonlyMap<string, { count: number; goods: number; bads: number }>;
}

function join(segments: readonly UnpackedSegment[], style: NumberStyle, outcome: OutcomeCodes | null): Joined | null {
  const rows = segments.reduce((sum, segment) => sum + segment.rows, 0);
  const wholes = new Int32Array(rows);
  const known = outcome ? new Uint8Array(rows) : null;
  const texts = new Map<string, { count: number; goods: number; bads: number }>();
  let length = 0;
  let row = 0;
  for (const segment of segments) {
    const factor = segment.style === null ? 1 : 10 ** (style.most - segment.style.most);
    // A text of one segment may be a number in the style of another.
    const numberOf = Float64Array.from(segment.texts, (text) => {
      const number = spelled(text, style.sign);
      return number === null ? NaN : wholeOf(number, style);
    });
    const kept = segment.texts.map((text, code) => {
      if (!Number.isNaN(numberOf[code])) return null;
      let entry = texts.get(text);
      if (entry === undefined) texts.set(text, (entry = { count: 0, goods: 0, bads: 0 }));
      return entry;
    });
    for (let at = 0; at < segment.rows; at++, row++) {
      const cell = segment.cells[at];
      let whole = cell;
      if (cell < leastNumber) {
        const code = cell - textBase;
        const entry = kept[code];
        if (entry !== null) {
          entry.count++;
          if (outcome) {
            if (outcome[row] === 1) entry.goods++;
            else if (outcome[row] === 0) entry.bads++;
          }
          continue;
        }
        whole = numberOf[code];
      } else if (factor !== 1) {
        const scaled = cell * factor;
        if (Math.abs(scaled) >= mostWhole) return null;
        whole = scaled;
      }
      wholes[length] = whole;
      if (known && outcome) known[length] = outcome[row];
      length++;
    }
  }
  return { rows, wholes: wholes.subarray(0, length), outcome: known?.subarray(0, length) ?? null, texts };
}

function withoutMissing(
  all: SortedCounts,
  missing: ReadonlySet<string>,
  style: NumberStyle,
): { kept: SortedCounts; tokens: { list: { value: string; count: number }[]; goods: number; bads: number } } {
  const tokens = { list: [] as { value: string; count: number }[], goods: 0, bads: 0 };
  const dropped = new Set<number>();
  for (const token of missing) {
    const number = spelled(token, style.sign);
    const whole = number === null ? NaN : wholeOf(number, style);
    const place = Number.isNaN(whole) ? -1 : all.wholes.indexOf(whole);
    if (place === -1) continue;
    dropped.add(place);
    tokens.list.push({ value: token, count: all.counts[place] });
    tokens.goods += all.goods[place];
    tokens.bads += all.bads[place];
  }
  if (dropped.size === 0) return { kept: all, tokens };
  const stays = (_: number, place: number): boolean => !dropped.has(place);
  const kept = {
    length: all.length - dropped.size,
    wholes: all.wholes.filter(stays),
    counts: all.counts.filter(stays),
    goods: all.goods.filter(stays),
    bads: all.bads.filter(stays),
  };
  return { kept, tokens };
}

/** Numbers with those that are spelled otherwise; null where one value is spelled in two ways, of which the first would have to be found. */
function merge(
  { length, wholes, counts, goods, bads }: SortedCounts,
  others: readonly (Counted & { goods: number; bads: number; value: number })[],
  style: NumberStyle,
): (CountedNumbers & { goods: Float64Array; bads: Float64Array }) | null {
  if (others.length === 0) {
    // Different whole numbers below 10^9 are different values: nothing is to be put in order.
    const values = new Float64Array(length);
    for (let place = 0; place < length; place++) values[place] = valueOf(wholes[place], style);
    return { length, values, counts, goods, bads, text: (place) => spell(wholes[place], style) };
  }
  const total = length + others.length;
  const [values, allCounts, allGoods, allBads] = Array.from({ length: 4 }, () => new Float64Array(total));
  const places = new Int32Array(total);
  for (let place = 0, own = 0, other = 0; place < total; place++) {
    const value = own < length ? valueOf(wholes[own], style) : Infinity;
    const rival = other < others.length ? others[other].value : Infinity;
    if (value === rival || (other > 0 && rival === others[other - 1].value)) return null;
    if (value < rival) {
      values[place] = value;
      allCounts[place] = counts[own];
      allGoods[place] = goods[own];
      allBads[place] = bads[own];
      places[place] = own++;
    } else {
      values[place] = rival;
      allCounts[place] = others[other].count;
      allGoods[place] = others[other].goods;
      allBads[place] = others[other].bads;
      places[place] = -1 - other++;
    }
  }
  const text = (place: number): string =>
    places[place] < 0 ? others[-1 - places[place]].text : spell(wholes[places[place]], style);
  return { length: total, values, counts: allCounts, goods: allGoods, bads: allBads, text };
}

/** As `mostFrequentOf`, spelling only the numbers that come into question. */
function mostFrequentNumbers(
  { length, wholes, counts }: SortedCounts,
  style: NumberStyle,
  others: readonly Counted[],
): Counted[] {
  const top: Counted[] = [];
  const take = (count: number, text: string): void => {
    let place = top.length;
    while (place > 0 && (count > top[place - 1].count || (count === top[place - 1].count && text < top[place - 1].text))) place--;
    if (place === mostListed) return;
    top.splice(place, 0, { text, count });
    if (top.length > mostListed) top.pop();
  };
  for (const { text, count } of others) take(count, text);
  let full = top.length === mostListed;
  for (let place = 0; place < length; place++) {
    if (full) {
      const last = top[mostListed - 1];
      if (counts[place] < last.count || (counts[place] === last.count && beginsLater(wholes[place], style, last.text))) continue;
    }
    take(counts[place], spell(wholes[place], style));
    full = top.length === mostListed;
  }
  return top;
}

/** Whether a number's spelling comes after a text by its first digits alone; false where these do not tell. */
function beginsLater(whole: number, style: NumberStyle, text: string): boolean {
  if (whole < 0) return false;
  const first = text.charCodeAt(0);
  if (first === 45) return true;
  let before = Math.floor(valueOf(whole, style));
  let digits = 1;
  for (let limit = 10; before >= limit; limit *= 10) digits++;
  for (let at = 0, power = 10 ** (digits - 1); at < digits; at++, power /= 10) {
    const digit = 48 + Math.floor(before / power);
    // Past its end NaN, which is neither.
    const other = text.charCodeAt(at);
    if (digit !== other) return digit > other;
    before %= power;
  }
  return false;
}
