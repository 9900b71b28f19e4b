import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { KeyedHash } from '../profiling/keyed-hash';
import type { Personal } from '../profiling/personal';
import { personalInSegment } from '../profiling/personal-in-segment';
import type { CodedColumn } from '../reading/plain/column-coder';
import { NotPlain } from '../reading/plain/field-index';
import type { NumberStyle } from '../reading/plain/number-style';
import { SegmentCoder } from '../reading/plain/segment-coder';
import { type PackedColumn, encodePacked, packTexts, textsOfCoded } from '../storage/packedSegment';
import type { Task } from './task';

export interface CodePayload {
  readonly pieces: readonly Uint8Array<ArrayBuffer>[];
  readonly rows: number;
  readonly header: readonly string[];
  readonly choices: Pick<ReadingChoices, 'delimiter' | 'trim' | 'decimal' | 'missing'>;
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
    }
  | { readonly notPlain: string };

/** Kept between segments of one file, because it holds large arrays; dropped when no segment has come for a while. */
let kept: { coder: SegmentCoder; form: string } | null = null;
let dropping: NodeJS.Timeout | undefined;
const idle = 2000;
const segmentRows = 65_536;

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
    mostRows: segmentRows,
  };
  const name = JSON.stringify(form);
  if (kept?.form !== name) kept = { coder: new SegmentCoder(form), form: name };
  const { coder } = kept;
  dropping = setTimeout(() => (kept = null), idle);
  dropping.unref();
  try {
    coder.begin(payload.styles, payload.personal?.map((one) => one !== null) ?? []);
    for (const piece of payload.pieces) {
      if (control.cancelled()) throw new Error('cancelled');
      coder.add(piece);
    }
    if (coder.rows !== payload.rows) return { notPlain: 'records end elsewhere than they seemed to' };
  } catch (thrown) {
    if (thrown instanceof NotPlain) return { notPlain: thrown.message };
    throw thrown;
  }
  const missing = new Set(['', ...choices.missing]);
  const personal =
    payload.personal ?? coder.columns.map((column, position) => personalInSegment(header[position], column, missing));
  const key = new KeyedHash(Buffer.from(payload.key));
  const contents = coder.columns.map((column, position) => {
    if (control.cancelled()) throw new Error('cancelled');
    // Copied: what deflate gives is a view on a larger buffer.
    const content = new Uint8Array(encodePacked(personal[position] === null ? column : hashed(column, key, missing)));
    control.transfer(content.buffer);
    return content;
  });
  const keys = coder.keys.slice(0, coder.rows);
  control.transfer(keys.buffer);
  return { notPlain: null, rows: coder.rows, contents, keys, styles: coder.columns.map(({ style }) => style), personal };
};

function hashed(column: CodedColumn, key: KeyedHash, missing: ReadonlySet<string>): PackedColumn {
  const { codes, texts } = textsOfCoded(column);
  return packTexts({ codes, texts: texts.map((text) => (missing.has(text) ? text : key.of(text))) });
}
