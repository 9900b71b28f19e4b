import type { CodedColumn } from '../reading/plain/column-coder';
import { type PackedColumn, packTexts, textsOfCoded } from '../storage/packedSegment';
import { type KeyedHash, hashBytes } from './sha256/keyed-hash';

/** A coded column of texts that identify people with a keyed hash in place of each; texts that stand for missing stay as they are. */
export function hashColumn(column: CodedColumn, key: KeyedHash, missing: ReadonlySet<string>): PackedColumn {
  // Only the first segment, on which a column is judged, can have kept some as numbers.
  if (column.style !== null) {
    const { codes, texts } = textsOfCoded(column);
    return packTexts({ codes, texts: texts.map((text) => (missing.has(text) ? text : key.of(text))) });
  }
  const { size, bytes, places } = column.texts;
  const longest = Math.max(...[...missing].map((text) => Buffer.byteLength(text)));
  const hashed = new Uint8Array(size * Math.max(hashBytes, longest));
  const begins = new Int32Array(size + 1);
  for (let code = 0, at = 0; code < size; code++) {
    const [from, to] = [places[code], places[code + 1]];
    if (to - from <= longest && missing.has(column.texts.text(code))) {
      hashed.set(bytes.subarray(from, to), at);
      at += to - from;
    } else {
      key.write(bytes, from, to, hashed, at);
      at += hashBytes;
    }
    begins[code + 1] = at;
  }
  key.finish();
  return { rows: column.rows, cells: column.cells, style: null, texts: { size, bytes: hashed, places: begins } };
}
