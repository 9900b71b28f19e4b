import { parse } from 'csv-parse/sync';
import { stringify } from 'csv-stringify/sync';
import fc from 'fast-check';

/** Generated files and what they must come back as: the reader alone and the whole product are tested with the same. */

/** Longest that such a file may take: a hang is a failure, a busy machine is not. */
export const patience = 5000; // ms

/** A proper table: every cell is quoted, so that anything may stand in it. */
export interface WildTable {
  readonly header: readonly string[];
  readonly rows: readonly (readonly string[])[];
  readonly delimiter: string;
  readonly end: string;
  readonly bytes: Buffer;
}

const cell = fc.oneof(
  fc.string({ unit: 'grapheme', maxLength: 12 }),
  fc.constantFrom('', ' ', '"', '""', ',', '\n', '\r\n', '\r', '\t', ' a ', '1e309', '-', "'"),
);
const cells = fc
  .integer({ min: 1, max: 5 })
  .chain((width) => fc.array(fc.array(cell, { minLength: width, maxLength: width }), { minLength: 1, maxLength: 12 }));

/** Comes back to the letter. NUL and the sign for a lost character are refused anywhere, and stand in none. */
export const wildTables: fc.Arbitrary<WildTable> = fc
  .tuple(cells, fc.constantFrom(',', ';', '\t', '|'), fc.constantFrom('\n', '\r\n', '\r'))
  .map(([drawn, delimiter, end]) => {
    const rows = drawn.map((row) => row.map((text) => text.replaceAll(/[\0\ufffd]/g, '')));
    const header = rows[0].map((_, index) => `c${index}`);
    const bytes = Buffer.from(stringify([header, ...rows], { delimiter, record_delimiter: end, quoted: true }));
    return { header, rows, delimiter, end, bytes };
  });

const anything = fc
  .array(fc.constantFrom('a', '1', ' ', ',', '"', '\n', '\r\n', '\r', 'é', '\0', '\t'), { maxLength: 60 })
  .map((parts) => parts.join(''));
const field = fc.oneof(
  { weight: 4, arbitrary: fc.constantFrom('a', '1', '', ' ', 'é', '"a,b"', '"a""b"', '"a\nb"', ' "a"', 'a"b') },
  { weight: 1, arbitrary: fc.constantFrom('"', '\0', ',', '"a"b', '\r') },
);
/** Of two fields, most of them proper. */
const lines = fc
  .array(fc.tuple(field, field), { minLength: 1, maxLength: 8 })
  .map((rows) => `${rows.map((row) => row.join(',')).join('\n')}\n`);

/** Any characters below a header of two columns, parted by commas. Comes back as `readByOracle` reads it, or is refused. */
export const wildTexts: fc.Arbitrary<string> = fc.oneof(anything, lines).map((text) => `x,y\n${text}`);

/** The rows below the header as csv-parse reads them; blank lines at the end are none. */
export function readByOracle(text: string, trim: boolean): string[][] {
  const records: string[][] = parse(text, {
    trim,
    record_delimiter: ['\r\n', '\n', '\r'],
    relax_column_count: true,
    relax_quotes: true,
    skip_empty_lines: false,
  });
  while (records.length > 0 && records[records.length - 1].length === 1 && records[records.length - 1][0] === '') records.pop();
  return records.slice(1);
}

/** Most are no text at all. */
export const wildBytes: fc.Arbitrary<Buffer> = fc.uint8Array({ maxLength: 200 }).map((drawn) => Buffer.from(drawn));
