import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { numberReader } from '../../reading/index';
import { leastNumber, textBase } from '../../reading/plain/column-coder';
import { type NumberStyle, spelled, valueOf, wholeOf } from '../../reading/plain/number-style';
import { type UnpackedSegment, packedForm, textsOfUnpacked, unpack } from '../../storage/packedSegment';
import { type TextSegment, decodeTexts, inflateSegment } from '../../storage/segmentCoding';

/** States of a row; SPECIAL + k holds the k-th special code. */
export const VALUE = 0;
export const MISSING = 1;
export const UNREADABLE = 2;
export const SPECIAL = 3;

/** What is needed of a column: its numbers, its texts, or no more than whether something stands there. */
export type Needed = 'numbers' | 'texts' | 'presence';

export interface ColumnReading {
  readonly needed: Needed;
  readonly choices: ReadingChoices;
  /** Values by special code, as the definition names them. */
  readonly special: readonly (readonly (number | string)[])[];
}

export interface ColumnValues {
  readonly state: Uint8Array;
  /** Per row, where numbers are needed; NaN unless the state is VALUE. */
  readonly numbers: Float64Array | null;
  /** Per row a place in `texts`, where texts are needed; of rows whose state is VALUE alone. */
  readonly codes: Uint32Array | null;
  readonly texts: readonly string[];
}

/**
 * Reads a stored column segment by segment: one is unpacked at a time, and what is kept is one number, or one place in a dictionary, per row.
 *
 * @param contents the segments in order, as they are stored
 */
export function readValues(contents: readonly Uint8Array[], rows: number, reading: ColumnReading): ColumnValues {
  const { needed, choices } = reading;
  const missing = new Set(['', ...choices.missing]);
  const reader = numberReader(choices);
  const specials = new Map(reading.special.flatMap((values, k) => values.map((value) => [value, SPECIAL + k] as const)));
  const state = new Uint8Array(rows);
  const numbers = needed === 'numbers' ? new Float64Array(rows).fill(NaN) : null;
  const codes = needed === 'texts' ? new Uint32Array(rows) : null;
  const places = new Map<string, number>();
  let at = 0;

  /** State and number of a text, whichever way the segment keeps it. */
  const judge = (text: string): { state: number; number: number } => {
    if (missing.has(text)) return { state: MISSING, number: NaN };
    if (needed !== 'numbers') return { state: specials.get(text) ?? VALUE, number: NaN };
    const number = reader.read(text);
    if (Number.isNaN(number)) return { state: specials.get(text) ?? UNREADABLE, number };
    const special = specials.get(number);
    return special === undefined ? { state: VALUE, number } : { state: special, number: NaN };
  };
  const placeOf = (text: string): number => {
    const known = places.get(text);
    if (known !== undefined) return known;
    places.set(text, places.size);
    return places.size - 1;
  };

  const fromTexts = ({ codes: rowCodes, texts }: TextSegment): void => {
    const judged = texts.map(judge);
    const mapped = codes ? Uint32Array.from(texts, (text, k) => (judged[k].state === VALUE ? placeOf(text) : 0)) : null;
    for (let row = 0; row < rowCodes.length; row++, at++) {
      const code = rowCodes[row];
      state[at] = judged[code].state;
      if (numbers) numbers[at] = judged[code].number;
      if (codes && mapped) codes[at] = mapped[code];
    }
  };
  const fromNumbers = (segment: UnpackedSegment, style: NumberStyle): void => {
    const judged = segment.texts.map(judge);
    const absent = wholesOf(missing, style);
    for (let row = 0; row < segment.rows; row++, at++) {
      const cell = segment.cells[row];
      if (cell < leastNumber) {
        const { state: is, number } = judged[cell - textBase];
        state[at] = is;
        if (numbers) numbers[at] = number;
      } else if (absent.has(cell)) state[at] = MISSING;
      else if (numbers) {
        const number = valueOf(cell, style);
        const special = specials.size > 0 ? specials.get(number) : undefined;
        if (special === undefined) numbers[at] = number;
        else state[at] = special;
      }
    }
  };

  for (const content of contents) {
    const bytes = inflateSegment(content);
    if (bytes[0] !== packedForm) {
      fromTexts(decodeTexts(bytes));
      continue;
    }
    const segment = unpack(bytes);
    const { style } = segment;
    const asNumbers = style !== null && needed !== 'texts' && style.sign === choices.decimal.charCodeAt(0);
    if (asNumbers) fromNumbers(segment, style);
    else fromTexts(textsOfUnpacked(segment));
  }
  if (at !== rows) throw new Error(`A column has ${at} of ${rows} rows`);
  return { state, numbers, codes, texts: [...places.keys()] };
}

/** Missing tokens that are numbers, as whole numbers of a style. */
function wholesOf(missing: ReadonlySet<string>, style: NumberStyle): Set<number> {
  const wholes = new Set<number>();
  for (const token of missing) {
    const number = spelled(token, style.sign);
    const whole = number === null ? NaN : wholeOf(number, style);
    if (!Number.isNaN(whole)) wholes.add(whole);
  }
  return wholes;
}
