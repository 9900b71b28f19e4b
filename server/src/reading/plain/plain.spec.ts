import { stringify } from 'csv-stringify/sync';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { encodePacked } from '../../storage/packedSegment';
import { decodeSegment } from '../../storage/segmentCoding';
import { type ReadingChoices, readSegments } from '../index';
import { inPieces } from '../testing/generated-files';
import { NotPlain } from './field-index';
import { SegmentCoder } from './segment-coder';
import { splitRecords } from './split-records';

/** The fast reader gives what the careful one gives, or says that the file is not for it. */

interface Read {
  header: string[];
  sha256: string;
  bytes: number;
  /** Per segment and row its fields. */
  segments: string[][][];
  keys: number[];
}

const segmentRows = 5;

async function fast(bytes: Buffer, choices: ReadingChoices, size: number): Promise<Read | string> {
  const options = { segmentRows, mostRows: 60, mostColumns: 6 };
  const file = splitRecords(inPieces(bytes, size), choices, options);
  const segments: string[][][] = [];
  const keys: number[] = [];
  let coder: SegmentCoder | null = null;
  try {
    for await (const records of file.segments) {
      const { bytes: piece, rows } = records;
      coder ??= new SegmentCoder({
        delimiter: choices.delimiter.charCodeAt(0),
        trim: choices.trim,
        width: file.facts().header.length,
        mostBytes: 40,
        sign: 46,
        seed: 99,
        mostRows: segmentRows,
        dateOrder: choices.dateOrder,
        dateTimes: choices.dateTimes,
        missing: choices.missing ?? [],
        notDates: file.facts().header.map((name) => choices.notDates?.includes(name) ?? false),
      });
      coder.begin([], []);
      coder.add(piece);
      if (coder.rows !== rows) throw new NotPlain('records end elsewhere than they seemed to');
      const columns = coder.columns.map((column) => decodeSegment(encodePacked(column)));
      segments.push(Array.from({ length: rows }, (_, row) => columns.map(({ codes, texts }) => texts[codes[row]])));
      keys.push(...coder.keys.subarray(0, rows));
      file.takeBack(records);
    }
  } catch (thrown) {
    if (thrown instanceof NotPlain) return thrown.message;
    throw thrown;
  }
  const { header, sha256, bytes: count } = file.facts();
  return { header, sha256, bytes: count, segments, keys };
}

async function careful(bytes: Buffer, choices: ReadingChoices, size: number): Promise<Omit<Read, 'keys'> | null> {
  const options = { segmentRows, mostRows: 60, mostColumns: 6, mostCharacters: 40 };
  const file = readSegments(inPieces(bytes, size), choices, options);
  const segments: string[][][] = [];
  for await (const { rows, columns } of file.segments)
    segments.push(Array.from({ length: rows }, (_, row) => columns.map(({ codes, texts }) => texts[codes[row]])));
  const { header, sha256, bytes: count, problems } = file.facts();
  return problems.length > 0 ? null : { header, sha256, bytes: count, segments };
}

const choicesOf = (delimiter: string, trim: boolean, encoding: ReadingChoices['encoding'] = 'utf-8'): ReadingChoices => ({
  delimiter,
  trim,
  encoding,
});

async function same(bytes: Buffer, choices: ReadingChoices, sizes: readonly [number, number]): Promise<'read' | 'not plain'> {
  const [quick, exact] = [await fast(bytes, choices, sizes[0]), await careful(bytes, choices, sizes[1])];
  if (typeof quick === 'string') return 'not plain';
  const { keys, ...read } = quick;
  expect(read).toEqual(exact);
  // Equal rows have equal keys, in whichever segment and style they were coded; others have different ones.
  const byKey = new Map<number, string>();
  read.segments.flat().forEach((row, place) => {
    const text = JSON.stringify(row);
    expect(byKey.get(keys[place]) ?? text).toBe(text);
    byKey.set(keys[place], text);
  });
  expect(byKey.size).toBe(new Set(read.segments.flat().map((row) => JSON.stringify(row))).size);
  return 'read';
}

const sizes = fc.tuple(fc.integer({ min: 1, max: 40 }), fc.integer({ min: 1, max: 4096 }));
const cell = fc.oneof(
  fc.constantFrom('', '0', '1', '1.5', '1.50', '-0', '007', 'NA', 'a b', ' x', 'é', '€', '"', '"q"', ',', '\n', '\r\n', '\t'),
  fc.integer({ min: -99, max: 99 }).map(String),
  fc.string({ unit: 'grapheme', maxLength: 6 }).map((text) => text.replaceAll(/[\0\ufffd]/g, '')),
);

describe('the fast reader', () => {
  it('reads every well-formed file with line feeds, as the careful one does, cut anywhere', async () => {
    // Six graphemes can be longer than the longest field, which is left to the careful reader.
    const short = cell.filter((text) => Buffer.byteLength(text) <= 32);
    const table = fc
      .integer({ min: 1, max: 4 })
      .chain((width) => fc.array(fc.array(short, { minLength: width, maxLength: width }), { minLength: 1, maxLength: 30 }));
    await fc.assert(
      fc.asyncProperty(table, sizes, fc.constantFrom(',', ';', '\t', '|'), fc.constantFrom('\n', '\r\n'), fc.boolean(), async (rows, cut, delimiter, end, quoted) => {
        const header = rows[0].map((_, place) => `c${place}`);
        const bytes = Buffer.from(stringify([header, ...rows], { delimiter, record_delimiter: end, quoted }));
        // A lone carriage return inside quotes is content; nothing else here is unusual.
        if (quoted) expect(await same(bytes, choicesOf(delimiter, false), cut)).toBe('read');
        else await same(bytes, choicesOf(delimiter, true), cut);
      }),
      { numRuns: 400 },
    ); // prettier-ignore
  });

  it('reads dates in a stated order as the careful one does, and leaves a day that does not exist', async () => {
    const part = fc.integer({ min: 0, max: 32 }).map((value) => (value % 3 === 0 ? String(value).padStart(2, '0') : String(value)));
    const real = fc.tuple(fc.integer({ min: 1, max: 12 }), fc.integer({ min: 1, max: 12 }));
    const date = fc.oneof(
      { weight: 8, arbitrary: fc.tuple(real, fc.constantFrom('/', '.', '-')).map(([[a, b], sign]) => `${a}${sign}${b}${sign}2024`) },
      { weight: 1, arbitrary: fc.tuple(part, part, fc.constantFrom('/', '.', '-')).map(([a, b, sign]) => `${a}${sign}${b}${sign}2023`) },
      { weight: 4, arbitrary: fc.constantFrom('', '1', '2.5', 'NA', '2024-03-04', '04/03/24', '1.2.20244', '00/00/0000', '1/2-2024', 'é/1/2024', '2024/3/4', '2024-03-04 10:00:00', '4/3/2024 9:30', '2024-03-04T10:00:00.125+01:00') },
    );
    const table = fc
      .integer({ min: 1, max: 3 })
      .chain((width) => fc.array(fc.array(date, { minLength: width, maxLength: width }), { minLength: 1, maxLength: 30 }));
    const outcomes = { read: 0, 'not plain': 0 };
    await fc.assert(
      fc.asyncProperty(table, sizes, fc.constantFrom('day-month-year' as const, 'month-day-year' as const, undefined), fc.constantFrom('day' as const, undefined), fc.constantFrom(undefined, ['c0'], ['c1', 'elsewhere']), fc.boolean(), async (rows, cut, dateOrder, dateTimes, notDates, quoted) => {
        const bytes = Buffer.from(stringify([rows[0].map((_, place) => `c${place}`), ...rows], { quoted }));
        const choices = { ...choicesOf(',', true), dateOrder, dateTimes, notDates, missing: ['', 'NA', '00/00/0000'] };
        outcomes[await same(bytes, choices, cut)]++;
      }),
      { numRuns: 400 },
    );
    expect(outcomes.read).toBeGreaterThan(100);
    expect(outcomes['not plain']).toBeGreaterThan(30);
    // Spelled in two ways, a day is one text and its rows are equal.
    const twice = await fast(Buffer.from('a\n3/4/2024\n03.04.2024\n2024-04-03\n'), { ...choicesOf(',', true), dateOrder: 'day-month-year' }, 9);
    if (typeof twice === 'string') throw new Error(twice);
    expect(twice.segments.flat(2)).toEqual(['2024-04-03', '2024-04-03', '2024-04-03']);
    expect(new Set(twice.keys).size).toBe(1);
    const timed = await fast(Buffer.from('a\n2024/3/4\n2024-03-04 10:00\n2024-03-04\n"2024-03-04T10:00:00Z"\n'), { ...choicesOf(',', true), dateTimes: 'day' }, 9);
    if (typeof timed === 'string') throw new Error(timed);
    expect(timed.segments.flat(2)).toEqual(['2024-03-04', '2024-03-04', '2024-03-04', '2024-03-04']);
    expect(new Set(timed.keys).size).toBe(1);
    expect(await fast(Buffer.from('a\n2024-03-04 25:00\n'), { ...choicesOf(',', true), dateTimes: 'day' }, 9)).toContain('does not exist');
    const apart = await fast(Buffer.from('a,b\n31-4-2024,3/4/2024\n3-4-2024,"4/4/2024"\n'), { ...choicesOf(',', true), dateOrder: 'day-month-year', notDates: ['a'] }, 9);
    if (typeof apart === 'string') throw new Error(apart);
    expect(apart.segments.flat(2)).toEqual(['31-4-2024', '2024-04-03', '3-4-2024', '2024-04-04']);
    expect(await fast(Buffer.from('a\n31/4/2024\n'), { ...choicesOf(',', true), dateOrder: 'day-month-year' }, 9)).toContain('does not exist');
  }); // prettier-ignore

  it('agrees on anything else, or leaves it', async () => {
    const wild = fc
      .array(fc.constantFrom('a', '1', '.5', ' ', ',', '"', '\n', '\n', '\r\n', '\r', 'é', '\0', '\t', '-', '\ufffd'), {
        maxLength: 60,
      })
      .map((parts) => parts.join(''));
    const outcomes = { read: 0, 'not plain': 0 };
    await fc.assert(
      fc.asyncProperty(fc.constantFrom('x,y\n', 'x\n', 'x,y,z\n'), wild, sizes, fc.boolean(), async (header, text, cut, trim) => {
        outcomes[await same(Buffer.from(header + text), choicesOf(',', trim), cut)]++;
      }),
      { numRuns: 3000 },
    );
    expect(outcomes.read).toBeGreaterThan(100);
    expect(outcomes['not plain']).toBeGreaterThan(100);
  });

  it('reads the other encodings, and leaves what does not belong to them', async () => {
    const text = `naïve,prix\r\n${Array.from({ length: 12 }, (_, row) => `€ ${row},"œuf\n😀"`).join('\r\n')}\r\n`;
    const utf16 = Buffer.from(`\ufeff${text}`, 'utf16le');
    for (const cut of [1, 3, 4096]) {
      expect(await same(Buffer.from(`\ufeff${text}`), choicesOf(',', true), [cut, 100])).toBe('read');
      expect(await same(utf16, choicesOf(',', true, 'utf-16le'), [cut, 100])).toBe('read');
      expect(await same(Buffer.from(utf16).swap16(), choicesOf(',', true, 'utf-16be'), [cut, 100])).toBe('read');
      expect(await same(Buffer.from('a,b\n\xe9,\x80\n', 'latin1'), choicesOf(',', true, 'windows-1252'), [cut, 100])).toBe(
        'read',
      );
      expect(await fast(Buffer.from('a,b\n\xe9,1\n', 'latin1'), choicesOf(',', true), cut)).toContain('not UTF-8');
      expect(await fast(Buffer.from('a,b\n\x81,1\n', 'latin1'), choicesOf(',', true, 'windows-1252'), cut)).toContain('encoding');
    }
  });

  it('lets blank lines stand at the end, and leaves everything that has a problem', async () => {
    const rows = '1,2\n'.repeat(5);
    expect(await same(Buffer.from(`a,b\n${rows}\n\r\n\n`), choicesOf(',', true), [4096, 9])).toBe('read');
    const not = (text: string): Promise<Read | string> => fast(Buffer.from(text), choicesOf(',', true), 4096);
    expect(await not('a,b\n1,2\n\n1,2\n')).toContain('too few');
    expect(await not('a,b\n1,2,3\n')).toContain('too many');
    expect(await not('a,b\n"1"x,2\n')).toContain('closing quote');
    expect(await not('a,b\n1,"2\n')).toContain('open quote');
    expect(await not('a,b\n1,\0\n')).toContain('NUL');
    expect(await not('a,b\n1,\ufffd\n')).toContain('lost');
    expect(await not('a,\ufffd\n1,2\n')).toContain('lost');
    // The careful reader counts the blanks after a field.
    expect(await not(`a,b\n1,x${' '.repeat(40)}\n`)).toContain('long field');
    expect(await not(`a,b\n1,${'x'.repeat(41)}\n`)).toContain('long field');
    expect(await not(`a,b\n${'1,2\n'.repeat(61)}`)).toContain('too many rows');
    expect(await not('a,b\n')).toContain('no rows');
    expect(await not('a,a\n1,2\n')).toContain('header');
    expect(await not('PK\u0003\u0004')).toBe('archive');
  });
});
