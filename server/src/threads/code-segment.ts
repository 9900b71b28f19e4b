import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { KeyedHash } from '../profiling/sha256/keyed-hash';
import type { Personal } from '../profiling/personal';
import { hashColumn } from '../profiling/hash-column';
import { personalInSegment } from '../profiling/personal-in-segment';
import { type SegmentWritings, watchedColumns, writingsOf, writingsOfTexts } from '../profiling/writings';
import { NotPlain } from '../reading/plain/field-index';
import type { NumberStyle } from '../reading/plain/number-style';
import { SegmentCoder } from '../reading/plain/segment-coder';
import { encodePacked, textsOfCoded } from '../storage/packedSegment';
import type { CodedColumn } from '../reading/plain/column-coder';
import type { Task, TaskControl } from './task';

export interface CodePayload {
  /** Over shared memory; may be rewritten. */
  readonly bytes: Uint8Array;
  readonly rows: number;
  readonly header: readonly string[];
  readonly choices: Pick<ReadingChoices, 'delimiter' | 'trim' | 'decimal' | 'missing' | 'dateOrder' | 'dateTimes' | 'notDates'>;
  readonly mostBytes: number;
  readonly seed: number;
  /** Styles of the columns in earlier segments. */
  readonly styles: readonly (NumberStyle | null)[];
  /** What identifies people, as found in the first segment; null: this is the first. */
  readonly personal: readonly (Personal | null)[] | null;
  /** Key of the hashes that such columns are kept as. */
  readonly key: Uint8Array;
}

export type CodeAnswer =
  | {
      readonly notPlain: null;
      readonly rows: number;
      /** Per column the segment as it is stored. */
      readonly contents: readonly Uint8Array[];
      /** Per row what stands for all its fields. */
      readonly keys: Float64Array;
      readonly styles: readonly (NumberStyle | null)[];
      readonly personal: readonly (Personal | null)[];
      /** How identifiers are written, by the positions of their columns. */
      readonly writings: ReadonlyMap<number, SegmentWritings>;
    }
  | { readonly notPlain: string };

/** Kept between segments of one file, because it holds large arrays; dropped when no segment has come for a while. */
let kept: { coder: SegmentCoder; form: string; mostRows: number } | null = null;
let dropping: NodeJS.Timeout | undefined;
const idle = 2000;

/** Kept for good: every one has a page of memory of its own, which is given back late. */
let hashing: { hash: KeyedHash; key: Buffer } | null = null;

function keyedHash(bytes: Uint8Array): KeyedHash {
  const key = Buffer.from(bytes);
  if (!hashing?.key.equals(key)) hashing = { hash: new KeyedHash(key), key };
  return hashing.hash;
}

/** Codes the records of one segment into columns as they are stored, off the event loop. */
export const codeSegment: Task<CodePayload, CodeAnswer> = (payload, control) => {
  const { choices, header } = payload;
  clearTimeout(dropping);
  const form = {
    delimiter: choices.delimiter.charCodeAt(0),
    trim: choices.trim,
    width: header.length,
    mostBytes: payload.mostBytes,
    sign: choices.decimal.charCodeAt(0),
    seed: payload.seed,
    dateOrder: choices.dateOrder,
    dateTimes: choices.dateTimes,
    missing: choices.missing,
    ...(choices.notDates && { notDates: header.map((name) => choices.notDates?.includes(name) ?? false) }),
  };
  // The first segment has more rows than the others: what it took is not kept for them.
  const name = JSON.stringify({ ...form, first: payload.personal === null });
  const mostRows = payload.rows;
  if (kept?.form !== name || kept.mostRows < mostRows)
    kept = { coder: new SegmentCoder({ ...form, mostRows }), form: name, mostRows };
  const { coder } = kept;
  dropping = setTimeout(() => (kept = null), idle);
  dropping.unref();
  try {
    coder.begin(payload.styles, payload.personal?.map((one) => one !== null) ?? []);
    coder.add(payload.bytes);
    if (coder.rows !== payload.rows) return { notPlain: 'records end elsewhere than they seemed to' };
  } catch (thrown) {
    if (thrown instanceof NotPlain) return { notPlain: thrown.message };
    throw thrown;
  }
  const missing = new Set(['', ...choices.missing]);
  const personal =
    payload.personal ?? coder.columns.map((column, position) => personalInSegment(header[position], column, missing));
  const contents = coder.columns.map((column, position) => {
    if (control.cancelled()) throw new Error('cancelled');
    return encodePacked(personal[position] === null ? column : hashColumn(column, keyedHash(payload.key), missing));
  });
  const keys = coder.keys.slice(0, coder.rows);
  control.transfer(keys.buffer);
  const writings = new Map(
    watchedColumns(personal).map((position) => {
      const found = writingsOfColumn(coder.columns[position], missing);
      control.transfer(found.joined.buffer);
      control.transfer(found.parted.buffer);
      return [position, found];
    }),
  );
  return {
    notPlain: null,
    rows: coder.rows,
    contents: together(contents, control),
    keys,
    styles: coder.columns.map(({ style }) => style),
    personal,
    writings,
  };
};

function writingsOfColumn(column: CodedColumn, missing: ReadonlySet<string>): SegmentWritings {
  // Only the first segment, on which a column is judged, can have kept some as numbers.
  if (column.style !== null) return writingsOfTexts(textsOfCoded(column).texts, (text) => missing.has(text));
  const { texts } = column;
  const longest = Math.max(...[...missing].map((text) => Buffer.byteLength(text)));
  return writingsOf(texts, (code) => texts.places[code + 1] - texts.places[code] <= longest && missing.has(texts.text(code)));
}

/** Handed over as one buffer: what deflate gives are views on larger ones. */
function together(contents: readonly Uint8Array[], control: TaskControl): Uint8Array[] {
  const whole = new Uint8Array(contents.reduce((sum, { length }) => sum + length, 0));
  control.transfer(whole.buffer);
  let at = 0;
  return contents.map((content) => {
    whole.set(content, at);
    at += content.length;
    return whole.subarray(at - content.length, at);
  });
}
