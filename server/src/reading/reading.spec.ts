import { describe, expect, it } from 'vitest';
import { readColumns, readForReplay, readSegments, sniff, ReadingError, type ReadFile, type ReadingChoices } from './index';
import { mostCellCharacters } from '@tallystone/contracts/samples/reading';
import { csvOf, inventedSample, specificationOf } from '../replay/invented-sample';
import type { ColumnOptions } from './index';

const CHOICES: ReadingChoices = { encoding: 'utf-8', delimiter: ',', trim: true };

async function* inPieces(bytes: Buffer, size: number): AsyncGenerator<Buffer> {
  for (let from = 0; from < bytes.length; from += size) yield Promise.resolve(bytes.subarray(from, from + size));
}

async function read(
  text: string | Buffer,
  choices: Partial<ReadingChoices> = {},
  options: ColumnOptions = {},
  size = 1 << 16,
): Promise<ReadFile> {
  const bytes = typeof text === 'string' ? Buffer.from(text) : text;
  return readColumns(inPieces(bytes, size), { ...CHOICES, ...choices }, options);
}

function rowsOf(file: ReadFile): string[][] {
  return Array.from({ length: file.rows }, (_, row) =>
    file.columns.map((column) =>
      column.kind === 'texts' ? column.texts[column.codes[row]] : (column.exceptions.get(row) ?? String(column.values[row])),
    ),
  );
}

const codesOf = (file: ReadFile): string[] => file.problems.map((problem) => problem.code);

describe('reading a raw file', () => {
  it('gives every field, whatever the chunk size', async () => {
    const text = 'a,b,c\r\n1," x ""y""\r\n z",3\r\n é ,"",\n"",NA,"a,b"';
    for (const size of [1, 2, 3, 7, 1000]) {
      const file = await read(text, {}, {}, size);
      expect(file.problems).toEqual([]);
      expect(rowsOf(file)).toEqual([
        ['1', ' x "y"\r\n z', '3'],
        ['é', '', ''],
        ['', 'NA', 'a,b'],
      ]);
    }
  });

  it('keeps blanks where trimming is off, and always inside quotes', async () => {
    expect(rowsOf(await read('a,b\n 1 ," 2 "\n', { trim: false }))[0][0]).toBe(' 1 ');
    expect(rowsOf(await read('a,b\n 1 , " 2 " \n'))).toEqual([['1', ' 2 ']]);
  });

  it('hashes the raw bytes', async () => {
    // SHA-256 of "abc" is the first example of FIPS 180-2, appendix B.1 (from memory); here with a header-only file.
    const file = await read('abc');
    expect(file.sha256).toBe('ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad');
    expect(codesOf(file)).toEqual(['no-rows']);
  });

  it('refuses an empty file and one with a header only', async () => {
    expect((await read('')).problems[0].message).toBe('No rows: the file is empty.');
    expect((await read('\n\n')).problems[0].code).toBe('no-rows');
    expect((await read('a,b\n')).problems[0].message).toContain('header');
  });

  it('names the line on which an open quote begins', async () => {
    const file = await read('a,b\n1,2\n3,"never\nclosed\n5,6\n');
    expect(file.problems).toEqual([
      { code: 'unclosed-quote', message: 'A quote is opened on line 3 and never closed.', where: { line: 3, record: 2 } },
    ]);
    expect(file.columns).toEqual([]);
  });

  it('lists the first 20 ragged lines and counts them all, and goes on to find the rest', async () => {
    const text = `a,b\n${'1\n'.repeat(30)}1,2\n1,"x"y\n`;
    const file = await read(text);
    expect(codesOf(file).sort()).toEqual(['ragged', 'stray-quote']);
    const ragged = file.problems.find((problem) => problem.code === 'ragged');
    expect(ragged?.where.count).toBe(30);
    expect(ragged?.where.lines).toEqual(Array.from({ length: 20 }, (_, index) => index + 2));
    expect(file.problems.find((problem) => problem.code === 'stray-quote')?.where).toMatchObject({ line: 33, record: 32 });
  });

  it('counts physical lines and records apart', async () => {
    const file = await read('a,b\n"1\n2\r\n3",x\n4\n');
    expect(file.problems[0]).toMatchObject({ code: 'ragged', where: { line: 5, record: 2 } });
  });

  it('names the line of a wrong byte wherever chunks end, between CR and LF too', async () => {
    const filler = '1,2\r\n'.repeat(1500);
    const wrong = '\xe9,2\r\n1,"x\r\n\xe9"\r\n1,2\r\n\r1,\xe9\r\n';
    const lines = [1502, 1504, 1507];
    for (const size of [1, 2, 3, 5, 4096, 1 << 16]) {
      const [problem] = (await read(Buffer.from(`a,b\r\n${filler}${wrong}`, 'latin1'), {}, {}, size)).problems;
      expect([size, problem.code, problem.where.lines]).toEqual([size, 'not-in-encoding', lines]);
      const lost = (await read(`a,b\r\n${filler}${wrong.replaceAll('\xe9', '\ufffd')}`, {}, {}, size)).problems;
      expect(lost.find(({ code }) => code === 'lost-characters')?.where.lines).toEqual(lines);
      const western = Buffer.from(`a,b\r\n${filler}${wrong.replaceAll('\xe9', '\x81')}`, 'latin1');
      const { problems } = await read(western, { encoding: 'windows-1252' }, {}, size);
      expect(problems.find(({ code }) => code === 'not-in-encoding')?.where.lines).toEqual(lines);
      const wide = Buffer.from(`a,b\r\n${filler}${wrong.replaceAll('\xe9', '\ud800')}`, 'utf16le');
      const found = (await read(wide, { encoding: 'utf-16le' }, {}, size)).problems;
      expect(found.find(({ code }) => code === 'not-in-encoding')?.where.lines).toEqual(lines);
    }
  });

  it('lets blank lines stand at the end only, but reads them as missing in a file of one column', async () => {
    expect((await read('a,b\n1,2\n\n\n')).rows).toBe(1);
    expect(codesOf(await read('a,b\n1,2\n\n3,4\n'))).toEqual(['ragged']);
    // They count as records before what is wrong with the next one.
    expect((await read('a,b\n\n\n3,"4"x\n')).problems.map(({ code, where }) => [code, where.line, where.record])).toEqual([
      ['ragged', 2, 1],
      ['stray-quote', 4, 3],
    ]);
    expect(rowsOf(await read('a\n1\n\n3\n'))).toEqual([['1'], [''], ['3']]);
  });

  it('asks to rename blank, equal and reserved names, keeping their places', async () => {
    const file = await read('a,,a,__proto__\n1,2,3,4\n');
    expect(file.problems.map((problem) => [problem.code, problem.where.position])).toEqual([
      ['blank-header', 2],
      ['duplicate-header', 3],
      ['reserved-header', 4],
    ]);
    expect(({} as Record<string, unknown>)['1']).toBeUndefined();
  });

  it('reads UTF-8 with a mark, UTF-16 of both orders and Windows-1252 alike', async () => {
    const text = 'naïve,prix\r\n€ 5,"œuf\n😀"\r\n';
    const utf16 = Buffer.from(`\ufeff${text}`, 'utf16le');
    const expected = [['€ 5', 'œuf\n😀']];
    for (const size of [1, 3, 4096]) {
      expect(rowsOf(await read(Buffer.from(`\ufeff${text}`), {}, {}, size))).toEqual(expected);
      expect(rowsOf(await read(utf16, { encoding: 'utf-16le' }, {}, size))).toEqual(expected);
      expect(rowsOf(await read(Buffer.from(utf16).swap16(), { encoding: 'utf-16be' }, {}, size))).toEqual(expected);
    }
    const western = Buffer.from([0x61, 0x2c, 0x62, 0x0a, 0x80, 0x2c, 0x9c, 0xe9, 0x0a]);
    expect(rowsOf(await read(western, { encoding: 'windows-1252' }))).toEqual([['€', 'œé']]);
    expect(codesOf(await read(utf16))).toEqual(['wrong-encoding']);
  });

  it('names the lines that are not UTF-8, at any chunk size, and never gives a replacement character', async () => {
    const bytes = Buffer.concat([
      Buffer.from('a,b\né,2\n3,'),
      Buffer.from([0xe9]),
      Buffer.from('\n5,6\n7,'),
      Buffer.from([0xff]),
      Buffer.from('\n'),
    ]);
    for (const size of [1, 2, 5, 4096]) {
      const file = await read(bytes, {}, {}, size);
      expect(file.problems).toHaveLength(1);
      expect(file.problems[0].where.lines).toEqual([3, 5]);
      expect(file.problems[0].message).toContain('Line 3 is not UTF-8; read as Windows-1252?');
      expect(file.columns).toEqual([]);
    }
    expect(codesOf(await read(Buffer.from([0x61, 0x0a, 0x31, 0x0a, 0xe2, 0x82])))).toEqual(['not-in-encoding']);
  });

  it('finds NUL bytes and oversized cells by line and column', async () => {
    const file = await read('a,b\n1,x\0y\n', {}, {}, 3);
    expect(file.problems[0]).toMatchObject({ code: 'nul-byte', where: { line: 2, record: 1, position: 2, column: 'b' } });
    const large = await read(`a,b\n1,2\n"${'x'.repeat(mostCellCharacters + 1)}",2\n`);
    expect(large.problems[0]).toMatchObject({ code: 'cell-too-large', where: { line: 3, record: 2, position: 1, column: 'a' } });
    expect((await read(`a,b\n${'x'.repeat(mostCellCharacters)},2\n`)).problems).toEqual([]);
  });

  it('reads dates in a stated order, and names line, record and column of a day that does not exist', async () => {
    const stated = { dateOrder: 'day-month-year', missing: ['', '00/00/0000'] } as const;
    const file = await read('a,on\nx,3/4/2024\n1.2.3,"04.03.2024"\n2024-01-02,00/00/0000\n', stated);
    expect(rowsOf(file)).toEqual([['x', '2024-04-03'], ['1.2.3', '2024-03-04'], ['2024-01-02', '00/00/0000']]); // prettier-ignore
    expect(rowsOf(await read('on\n3/4/2024\n'))).toEqual([['3/4/2024']]);
    const wrong = await read('a,on\n1,31/04/2024\n"two\nlines",30/02/2024\n3\n4,32/01/2024\n', stated);
    expect(wrong.problems.map(({ code, where }) => [code, where.line, where.record, where.column ?? null])).toEqual([
      ['no-such-date', 2, 1, 'on'],
      ['no-such-date', 4, 2, 'on'],
      ['ragged', 5, 3, null],
      ['no-such-date', 6, 4, 'on'],
    ]);
    expect(wrong.problems[0].message).toBe(
      'The cell in line 2, column 2 ("on"), is no date that exists, read with the day first.',
    );
    expect(wrong.columns).toEqual([]);
    // A column that holds none is left as it is, whatever its texts look like, and the others are not.
    const apart = await read('code,on\n31-04-2024,3/4/2024\n3-4-2024,04.03.2024\n', { ...stated, notDates: ['code'] });
    expect(rowsOf(apart)).toEqual([['31-04-2024', '2024-04-03'], ['3-4-2024', '2024-03-04']]); // prettier-ignore
    expect(codesOf(await read('code,on\n31-04-2024,31/04/2024\n', { ...stated, notDates: ['code'] }))).toEqual(['no-such-date']);
  });

  it('says after the cells that are listed what is true of how many more, with their columns', async () => {
    const stated = { dateOrder: 'day-month-year' } as const;
    const dates = Array.from({ length: 2000 }, (_, row) => `31/02/2024,${row < 1200 ? '30/02/2024' : '1/2/2024'}`);
    const file = await read(`on,"until, then"\n${dates.join('\n')}\n1\n`, stated);
    expect(file.problems).toHaveLength(22);
    expect(file.problems.slice(0, 20).map(({ where }) => where.line)).toEqual(
      Array.from({ length: 20 }, (_, place) => 2 + (place >> 1)),
    );
    expect(file.problems[20]).toEqual({
      code: 'no-such-date',
      message:
        '3\u202f180 more cells are no dates that exist, read with the day first: 1\u202f990 in column 1 ("on"), 1\u202f190 in column 2 ("until, then").',
      where: { count: 3200 },
    });
    expect(file.problems[21]).toMatchObject({ code: 'ragged', where: { line: 2002 } });
    // Those of another kind on earlier lines stay before, and those of the kind stay together with what is said of them.
    const mixed = await read(`a,b\n${`1\n`.repeat(3)}${'x\0,2\n'.repeat(21)}`);
    expect(codesOf(mixed)).toEqual(['ragged', ...Array.from({ length: 21 }, () => 'nul-byte')]);
    expect(mixed.problems.at(-1)?.message).toBe('1 more cell, as those above: 1 in column 1 ("a").');
  });

  it('writes counts of lines as counts are written, and a list that goes on without a stop', async () => {
    const file = await read(`a,b\n${'1\n'.repeat(6000)}`);
    expect(file.problems[0].message).toBe(
      `Line 2 has 1 field where the header has 2. 6\u202f000 lines in all: ${Array.from({ length: 20 }, (_, place) => place + 2).join(', ')}, …`,
    );
    expect((await read('a,b\n1\n2\n')).problems[0].message).toMatch(/ 2 lines in all: 2, 3\.$/);
  });

  it('recognises files that are no text', async () => {
    expect(codesOf(await read(Buffer.from('PK\u0003\u0004 [Content_Types].xml')))).toEqual(['spreadsheet']);
    expect(codesOf(await read(Buffer.from('PK\u0003\u0004 sample.csv')))).toEqual(['archive']);
    expect(codesOf(await read(Buffer.from('%PDF-1.7')))).toEqual(['pdf']);
    expect(codesOf(await read(Buffer.from([0xd0, 0xcf, 0x11, 0xe0, 0, 0])))).toEqual(['spreadsheet']);
  });

  it('states limits and what was found', async () => {
    const file = await read('a,b,c\n1,2,3\n1,2,3\n1,2,3\n', {}, { mostRows: 2, mostColumns: 2 });
    expect(file.problems.map((problem) => [problem.code, problem.where.count])).toEqual([
      ['too-many-rows', 3],
      ['too-many-columns', 3],
    ]);
  });

  it('widens codes as distinct texts come and turns crowded number columns into numbers', async () => {
    const values = Array.from({ length: 70_000 }, (_, row) => (row === 69_000 ? 'NA' : `${row}.50`));
    const text = `n,t\n${values.map((value) => `${value},${value}`).join('\n')}\n`;
    const numbers = { columns: new Set(['n']), format: { decimal: '.' as const, thousands: null } };
    const file = await read(text, {}, { numbers, segmentRows: 10_000 });
    const [n, t] = file.columns;
    if (n.kind !== 'numbers' || t.kind !== 'texts') throw new Error('kinds');
    expect(n.values.length).toBe(70_000);
    expect([n.values[0], n.values[65_535], n.values[69_999]]).toEqual([0.5, 65_535.5, 69_999.5]);
    expect([...n.exceptions]).toEqual([[69_000, 'NA']]);
    expect([0, 255, 256, 65_536, 69_999].map((row) => t.texts[t.codes[row]])).toEqual(
      [0, 255, 256, 65_536, 69_999].map((row) => values[row]),
    );
  });

  it('yields segments in order, reports progress and stops when told to', async () => {
    const text = `a,b\n${Array.from({ length: 2500 }, (_, row) => `${row},x`).join('\n')}\n`;
    const seen: number[] = [];
    const progress: number[] = [];
    const file = readSegments(inPieces(Buffer.from(text), 5000), CHOICES, {
      segmentRows: 1000,
      onProgress: ({ rows }) => progress.push(rows),
    });
    for await (const segment of file.segments) {
      seen.push(segment.firstRow, segment.rows);
      expect(segment.columns[1]).toEqual({ codes: new Uint8Array(segment.rows), texts: ['x'] });
    }
    expect(seen).toEqual([0, 1000, 1000, 1000, 2000, 500]);
    expect(file.facts().rows).toBe(2500);
    expect(progress.at(-1)).toBe(2500);
    const control = new AbortController();
    control.abort(new Error('stopped'));
    await expect(read(text, {}, { signal: control.signal })).rejects.toThrow('stopped');
  });
});

describe('guessing how a file is written', () => {
  it('finds delimiter, number signs and encoding', () => {
    expect(sniff(Buffer.from('age;income\n41;1.250,50\n37;980,00\n'))).toMatchObject({
      delimiter: ';',
      decimal: ',',
      thousands: '.',
      encoding: 'utf-8',
    });
    expect(sniff(Buffer.from('a,b\n1,"2;3;4"\n2,"5;6;7"\n'))).toMatchObject({ delimiter: ',', decimal: '.', problems: [] });
    expect(sniff(Buffer.from('a\tb\n1\t2\n'))).toMatchObject({ delimiter: '\t' });
    expect(sniff(Buffer.from('a,b\n1,2\n', 'utf16le'))).toMatchObject({ encoding: 'utf-16le', header: ['a', 'b'] });
  });

  it('offers Windows-1252 where bytes are not UTF-8, and does not mind a cut character', () => {
    const western = sniff(Buffer.from([0x61, 0x2c, 0x62, 0x0a, 0xe9, 0x2c, 0x32, 0x0a]));
    expect(western.encoding).toBe('windows-1252');
    expect(western.preview).toEqual([['é', '2']]);
    expect(western.problems.map((problem) => problem.code)).toEqual(['not-in-encoding']);
    expect(sniff(Buffer.from('a,b\n1,é').subarray(0, -1)).encoding).toBe('utf-8');
  });
});

describe('characters that were lost before', () => {
  it('are a problem with their lines, once each, in every encoding and however the file is cut', async () => {
    const text = 'a,b\nM\ufffdlaga,\ufffd\r\n"x\r\n\ufffd",é\r1,2\n';
    for (const size of [1, 2, 3, 5, 1000])
      for (const encoding of ['utf-8', 'utf-16le', 'utf-16be'] as const) {
        const bytes = encoding === 'utf-8' ? Buffer.from(text) : Buffer.from(text, 'utf16le');
        if (encoding === 'utf-16be') bytes.swap16();
        const { problems } = await read(bytes, { encoding }, {}, size);
        expect(problems.map(({ code, where }) => [code, where.lines])).toEqual([['lost-characters', [2, 4]]]);
        expect(problems[0].message).toContain(
          'Line 2 holds the sign for a character that was lost before the file came here (U+FFFD). Export the file again',
        );
      }
  });

  it('are told from bytes that are not of the encoding', async () => {
    expect(codesOf(await read(Buffer.from([0x61, 0x0a, 0xe9, 0x0a])))).toEqual(['not-in-encoding']);
    const both = await read(Buffer.concat([Buffer.from('a\n\ufffd\n'), Buffer.from([0xe9, 0x0a])]));
    expect(both.problems.map(({ code, where }) => [code, where.line])).toEqual([
      ['lost-characters', 2],
      ['not-in-encoding', 3],
    ]);
  });
});

describe('what one cell and one heading hold', () => {
  it('is limited alike for reading and for replay, which keeps a lost character of an earlier sample', async () => {
    const [header, first, ...others] = csvOf(inventedSample(40)).toString('utf8').split('\n');
    const withNote = (note: string): Buffer =>
      Buffer.from(
        [`${header},note`, `${first},${note}`, ...others.filter((line) => line !== '').map((line) => `${line},x`), ''].join('\n'),
      );
    const replayed = (note: string): Promise<unknown> => readForReplay(inPieces(withNote(note), 1 << 16), specificationOf());
    const just = 'x'.repeat(mostCellCharacters);
    expect(codesOf(await read(withNote(just)))).toEqual([]);
    await expect(replayed(just)).resolves.toMatchObject({ rows: 40 });
    await expect(replayed('\ufffd')).resolves.toMatchObject({ rows: 40 });
    const over = await read(withNote(`${just}x`));
    expect(over.problems).toMatchObject([{ code: 'cell-too-large', where: { line: 2, record: 1, column: 'note' } }]);
    expect(over.problems[0].message).toContain('more than 1,048,576 characters');
    const refusal = await replayed(`${just}x`).catch((thrown: unknown) => thrown);
    expect(refusal).toBeInstanceOf(ReadingError);
    expect((refusal as ReadingError).problems).toEqual(over.problems);
  });

  it('is limited for names, all that are too long together', async () => {
    const found = await read(`${'x'.repeat(1000)},${'y'.repeat(1001)},c,${'z'.repeat(1200)}\n1,2,3,4\n`);
    expect(found.problems).toMatchObject([
      { code: 'header-too-long', where: { line: 1, position: 2, length: 1001 } },
      { code: 'header-too-long', where: { line: 1, position: 4, length: 1200 } },
    ]);
    expect(found.problems[1].message).toBe(
      'The name of column 4 has 1,200 characters; at most 1,000 can be used. Shorten it in the file.',
    );
  });
});
