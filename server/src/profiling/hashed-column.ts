import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { textBase } from '../reading/plain/column-coder';
import type { UnpackedSegment } from '../storage/packedSegment';
import type { Personal } from './personal';
import { describeColumn } from './profile-column';

/** Up to so many different texts in its segments together, a column of hashes is counted like any other. */
const fewTexts = 100_000;

/**
 * The profile of a column of keyed hashes that nearly all differ, from their first 48 bits and, where these are equal, from the hashes themselves:
 * a dictionary of them would take more room than the column. Null for a column of few hashes.
 */
export function profileHashes(
  name: string,
  position: number,
  segments: readonly UnpackedSegment[],
  choices: ReadingChoices,
  personal: Personal,
  writings: number | null = null,
): ColumnProfile | null {
  const size = segments.reduce((sum, { texts }) => sum + texts.length, 0);
  if (size <= fewTexts) return null;
  const isMissing = new Set(['', ...choices.missing]);
  const missing = new Map<string, number>();
  const keys = new Float64Array(size);
  const places = new Map<number, string[]>();
  let length = 0;
  let rows = 0;
  for (const segment of segments) {
    rows += segment.rows;
    const tokens = segment.texts.map((text) => isMissing.has(text));
    if (tokens.includes(true)) {
      for (let row = 0; row < segment.rows; row++) {
        const code = segment.cells[row] - textBase;
        if (tokens[code]) missing.set(segment.texts[code], (missing.get(segment.texts[code]) ?? 0) + 1);
      }
    }
    segment.texts.forEach((text, code) => {
      if (!tokens[code]) keys[length++] = firstBits(text);
    });
  }
  const sorted = keys.subarray(0, length).sort();
  const repeated = new Set<number>();
  let distinct = length;
  for (let place = 1; place < length; place++)
    if (sorted[place] === sorted[place - 1]) {
      repeated.add(sorted[place]);
      distinct--;
    }
  // Where the first bits are equal, the whole hashes decide.
  if (repeated.size > 0) {
    for (const { texts } of segments)
      for (const text of texts) {
        if (isMissing.has(text)) continue;
        const key = firstBits(text);
        if (!repeated.has(key)) continue;
        const known = places.get(key) ?? [];
        if (!known.includes(text)) places.set(key, [...known, text]);
      }
    for (const texts of places.values()) distinct += texts.length - 1;
  }
  const known = rows - [...missing.values()].reduce((sum, count) => sum + count, 0);
  // Whether one hash fills nearly all rows would have to be counted; with so many others it cannot.
  if (distinct <= 0.02 * known) return null;
  return describeColumn({
    name,
    position,
    personal,
    writings,
    personalValues: [],
    rows,
    missingTokens: [...missing].map(([value, count]) => ({ value, count })),
    kind: 'categorical',
    kindFlags: [],
    distinct,
    mostFrequent: [{ text: '', count: 1 }],
    numbers: null,
    date: null,
    text: null,
  });
}

const digits = new Uint8Array(128);
'ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789-_'.split('').forEach((digit, value) => {
  digits[digit.charCodeAt(0)] = value;
});

/** The first eight characters of base64url (RFC 4648, section 5) stand for 48 bits. */
function firstBits(hash: string): number {
  let bits = 0;
  for (let at = 0; at < 8; at++) bits = bits * 64 + digits[hash.charCodeAt(at)];
  return bits;
}
