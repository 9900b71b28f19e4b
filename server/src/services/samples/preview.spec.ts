import { mostCellCharacters, mostDoubtfulLines } from '@tallystone/contracts/samples/reading';
import { describe, expect, it } from 'vitest';
import { previewOf } from './preview';

const doubtfulOf = async (text: string | Buffer, encoding: 'utf-8' | 'utf-16le' | 'utf-16be' | 'windows-1252' = 'utf-8', whole = true) => {
  const bytes = typeof text === 'string' ? Buffer.from(text) : text;
  return (await previewOf(bytes, whole, { delimiter: ',', encoding })).doubtful;
}; // prettier-ignore

describe('the doubtful lines of a preview', () => {
  it('are none in a file that is as it should be', async () => {
    expect(await doubtfulOf('a,b\n1,2\n"x\ny",4\n\n')).toEqual({ lines: [], count: 0 });
  });

  it('come with line, record, text and what is wrong, each line once', async () => {
    const bytes = Buffer.concat([
      Buffer.from('a,b\n1,2\n"two\nlines",2\n3\n\n5,"x"y\n'),
      Buffer.from([0xe9, 0xc3, 0xa9]),
      Buffer.from('\n7,\0\n8,"open\n9,9\n'),
    ]);
    expect(await doubtfulOf(bytes)).toEqual({
      count: 6,
      lines: [
        { line: 5, record: 3, text: '3', clipped: false, doubts: ['1 field where the header has 2'] },
        { line: 6, record: 4, text: '', clipped: false, doubts: ['1 field where the header has 2'] },
        { line: 7, record: 5, text: '5,"x"y', clipped: false, doubts: ['text after a closing quote'] },
        { line: 8, record: 6, text: '\\xE9é', clipped: false, doubts: ['not UTF-8', '1 field where the header has 2'] },
        { line: 9, record: 7, text: '7,\\0', clipped: false, doubts: ['column 2 ("b") contains a NUL byte'] },
        { line: 10, record: 8, text: '8,"open', clipped: false, doubts: ['a quote that is never closed'] },
      ],
    });
  });

  it('tell the record of a line that is wrongly encoded, inside a record of several lines and in the header', async () => {
    const bytes = Buffer.from('n\xe9,b\n1,2\n"x\n\xe9\ny",2\n3,4\n', 'latin1');
    const { lines } = await doubtfulOf(bytes);
    expect(lines.map(({ line, record, text }) => [line, record, text])).toEqual([
      [1, null, 'n\\xE9,b'],
      [4, 2, '\\xE9'],
    ]);
  });

  it('are clipped, and listed up to the limit with the count of all', async () => {
    const long = `${'x'.repeat(199)}é`;
    const { lines, count } = await doubtfulOf(`a,b\r\n${`${long}y\r\n`.repeat(70)}1,2\r\n`);
    expect(count).toBe(70);
    expect(lines).toHaveLength(mostDoubtfulLines);
    expect(lines[0]).toMatchObject({ line: 2, text: long, clipped: true });
    expect(lines.at(-1)?.line).toBe(mostDoubtfulLines + 1);
  });

  it('are the first of the file, whichever doubt is found first', async () => {
    // All of these bytes are decoded before the first record is told apart.
    const ragged = '1\n'.repeat(60);
    const bytes = Buffer.from(`a,b\n${ragged}${'\xe9,2\n'.repeat(60)}`, 'latin1');
    const { lines, count } = await doubtfulOf(bytes);
    expect(count).toBe(120);
    expect(lines.map(({ line }) => line)).toEqual(Array.from({ length: mostDoubtfulLines }, (_, place) => place + 2));
  });

  it('tell the first doubts of one line and how many more there are', async () => {
    const wide = Array.from({ length: 30 }, (_, place) => `c${place}`);
    const { lines } = await doubtfulOf(`${wide.join(',')}\n${wide.map(() => '\0').join(',')}\n`);
    expect(lines).toHaveLength(1);
    expect(lines[0].doubts.map((doubt) => doubt.slice(0, 9))).toEqual([...Array.from({ length: 10 }, (_, place) => `column ${place + 1}`.padEnd(9)), 'and 20 mo']);
    expect(lines[0].doubts[10]).toBe('and 20 more');
  }); // prettier-ignore

  it('are shown in the encoding that was chosen', async () => {
    const text = 'prix,b\r\n€ 5\r\nœuf,1\r\n';
    const wide = Buffer.from(`\ufeff${text}`, 'utf16le');
    for (const [bytes, encoding] of [[wide, 'utf-16le'], [Buffer.from(wide).swap16(), 'utf-16be'], [Buffer.from([...'prix,b\n'].map((one) => one.charCodeAt(0)).concat([0x80, 0x20, 0x35, 10])), 'windows-1252']] as const)
      expect((await doubtfulOf(bytes, encoding)).lines.map((one) => one.text)).toEqual(['€ 5']); // prettier-ignore
    const western = Buffer.from([...Buffer.from('a,b\n1,'), 0x80, 0x81, 10]);
    expect((await doubtfulOf(western, 'windows-1252')).lines[0].text).toBe('1,€\\x81');
    expect((await previewOf(western.fill(0x80, 6), true, { delimiter: ',', encoding: 'windows-1252' })).rows[0].cells[1]).toBe(
      '€€€',
    );
  });

  it('say nothing of a quote that the end of the part leaves open', async () => {
    const part = 'a,b\n1,2\n3\n4,"open\n';
    expect((await doubtfulOf(part, 'utf-8', false)).lines.map(({ line }) => line)).toEqual([3]);
    expect((await doubtfulOf(part, 'utf-8', true)).lines.map(({ line }) => line)).toEqual([3, 4]);
  });

  it('are counted fast where there are very many', async () => {
    const { lines, count } = await doubtfulOf(`a,b\n${'\n'.repeat(1_500_000)}1,2\n`);
    expect([lines.length, count]).toEqual([mostDoubtfulLines, 1_500_000]);
  });
});

describe('the date order of a preview', () => {
  const look = (dates: string[], chosen: Parameters<typeof previewOf>[2] = {}) =>
    previewOf(Buffer.from(`n,applied\n${dates.map((date, row) => `${row},${date}\n`).join('')}`), true, chosen);
  const reasonOf = ({ reasons }: Awaited<ReturnType<typeof look>>): string | undefined =>
    reasons.find(({ choice }) => choice === 'dateOrder')?.reason;

  it('is proposed where a value decides, with that value', async () => {
    const day = await look(['03/04/2024', '04/04/2024', '13/04/2024', '14/04/2024']);
    expect(day.choices.dateOrder).toBe('day-month-year');
    expect(reasonOf(day)).toBe('13/04/2024 in line 4 (applied) can only be day first; no value looked at says month first.');
    expect(day.problems).toEqual([]);
    expect(day.columns[1]).toMatchObject({ kind: 'date', against: null });
    expect(day.rows[0].cells[1]).toBe('2024-04-03');
    const month = await look(['03.04.2024', '4.30.2024']);
    expect(month.choices.dateOrder).toBe('month-day-year');
    expect(reasonOf(month)).toContain('4.30.2024 in line 3 (applied) can only be month first');
  });

  it('is asked for where nothing decides, and taken as it is said', async () => {
    const asked = await look(['03/04/2024', '04/05/2024']);
    expect(asked.choices).not.toHaveProperty('dateOrder');
    expect(asked.problems).toMatchObject([{ code: 'date-order', where: { column: 'applied', position: 2 } }]);
    expect(asked.problems[0].message).toContain('03/04/2024 in line 2 (applied) can be day first or month first');
    expect(asked.rows[0].cells[1]).toBe('03/04/2024');
    const said = await look(['03/04/2024', '04/05/2024'], { dateOrder: 'month-day-year' });
    expect(said.problems).toEqual([]);
    expect(said.rows[0].cells[1]).toBe('2024-03-04');
    expect(reasonOf(said)).toContain('no value looked at tells which');
    const text = await look(['03/04/2024', '04/05/2024'], { dateOrder: 'year-month-day' });
    expect(text).toMatchObject({ problems: [], columns: [{}, { kind: 'categorical' }] });
  });

  it('is asked for where values contradict each other, and shows what an order makes of them', async () => {
    const both = ['13/04/2024', '04/13/2024', '05/06/2024'];
    const asked = await look(both);
    expect(asked.problems[0].message).toContain(
      '13/04/2024 in line 2 (applied) can only be day first, and 04/13/2024 in line 3 (applied) can only be month first',
    );
    const said = await look(both, { dateOrder: 'day-month-year' });
    expect(said.problems).toMatchObject([{ code: 'no-such-date', where: { line: 3, record: 2, column: 'applied' } }]);
    expect(said.doubtful.lines).toMatchObject([{ line: 3, text: '1,04/13/2024' }]);
  });

  it('is not asked for by ISO dates, two-digit years, missing dates or a stray date among texts', async () => {
    for (const dates of [
      ['2024-04-03', '2024-04-04'],
      ['03/04/24', '04/05/24'],
      ['a', '03/04/2024', 'b'],
    ]) {
      const { choices, problems } = await look(dates);
      expect([choices.dateOrder, problems]).toEqual(['year-month-day', []]);
    }
    const missing = await look(['2024-04-03', '01/01/1900'], { missing: ['', '01/01/1900'] });
    expect(missing.choices.dateOrder).toBe('year-month-day');
  });
});

describe('columns in the form of dates that hold none under the order', () => {
  const table = (header: string, ...columns: readonly (readonly string[])[]): Buffer =>
    Buffer.from(`${header}\n${columns[0].map((_, row) => columns.map((column) => column[row]).join(',')).join('\n')}\n`);
  const many = (write: (row: number) => string): string[] => Array.from({ length: 300 }, (_, row) => write(row));
  const two = (value: number): string => String(value).padStart(2, '0');
  const dayFirst = many((row) => `${two(1 + (row % 28))}/${two(1 + (row % 12))}/2023`);
  const monthFirst = many((row) => `${two(1 + (row % 12))}/${two(1 + (row % 28))}/2023`);
  // Some of them are days, as of numbers at will 6 % are.
  const references = many((row) => (row % 20 === 7 ? `10-07-${1900 + (row % 90)}` : `${10 + ((row * 7) % 89)}-${13 + ((row * 11) % 86)}-${1000 + row}`));
  const look = (bytes: Buffer, chosen: Parameters<typeof previewOf>[2] = {}) => previewOf(bytes, true, chosen);

  it('stay text where they are reference numbers, and the order is that of the dates', async () => {
    const bytes = table('branch_code,applied_on', references, dayFirst);
    const shown = await look(bytes);
    expect(shown.choices).toMatchObject({ dateOrder: 'day-month-year', notDates: ['branch_code'] });
    expect(shown.problems).toEqual([]);
    expect(shown.columns.map(({ kind }) => kind)).toEqual(['categorical', 'date']);
    expect(shown.rows[0].cells).toEqual([references[0], '2023-01-01']);
    expect(shown.rows[7].cells[0]).toBe(references[7]);
    expect(shown.warnings).toMatchObject([{ code: 'not-dates', where: { column: 'branch_code', position: 1 } }]);
    expect(shown.warnings[0].message).toBe(
      `branch_code: ${references[0]} in line 2 is no day in any order: the column has the form of dates and holds none, and stays text.`,
    );
    // Alone in a file they ask for no order, and nothing has to be kept apart.
    const alone = await look(table('branch_code,n', references, references.map((_, row) => String(row))));
    expect(alone.choices.dateOrder).toBe('year-month-day');
    expect(alone.choices).not.toHaveProperty('notDates');
    expect([alone.problems, alone.warnings]).toEqual([[], []]);
  });

  it('stay text where their dates have the other order, and what can be done is said', async () => {
    const bytes = table('opened,applied_on', monthFirst, dayFirst);
    const asked = await look(bytes);
    expect(asked.choices).not.toHaveProperty('dateOrder');
    expect(asked.problems[0].message).toContain('no order reads both. Under either, the other column stays text; to have the dates of both, write them as YYYY-MM-DD');
    const day = await look(bytes, { dateOrder: 'day-month-year' });
    expect([day.problems, day.choices.notDates, day.columns.map(({ kind }) => kind)]).toEqual([[], ['opened'], ['categorical', 'date']]);
    expect(day.warnings.map(({ message }) => message)).toEqual([
      `opened: ${monthFirst[12]} in line 14 is no day with the day first: its dates have the other order, and it stays text. To have the dates of both, write them as YYYY-MM-DD in the file and bring it in again.`,
    ]);
    const month = await look(bytes, { dateOrder: 'month-day-year' });
    expect([month.problems, month.choices.notDates]).toEqual([[], ['applied_on']]);
    expect((await look(bytes, { dateOrder: 'year-month-day' })).choices).not.toHaveProperty('notDates');
  });

  it('are refused where their own values speak for the order: a day that does not exist is wrong in the file', async () => {
    const typo = dayFirst.map((date, row) => (row === 200 ? '31/02/2023' : date));
    const shown = await look(table('n,applied_on', typo.map((_, row) => String(row)), typo));
    expect(shown.choices).not.toHaveProperty('notDates');
    expect(shown.problems).toMatchObject([{ code: 'no-such-date', where: { line: 202, column: 'applied_on' } }]);
  });

  it('are those that are stated, where they are', async () => {
    const bytes = table('branch_code,applied_on', references, dayFirst);
    const none = await look(bytes, { notDates: [] });
    expect(none.problems.map(({ code }) => code)).toContain('no-such-date');
    const other = await look(bytes, { dateOrder: 'day-month-year', notDates: ['branch_code', 'applied_on'] });
    expect(other.rows[0].cells).toEqual([references[0], dayFirst[0]]);
  });
}); // prettier-ignore

describe('a preview of the beginning of a file', () => {
  const part = (text: string | Buffer, encoding: 'utf-8' | 'utf-16le' | 'utf-16be' = 'utf-8') =>
    previewOf(Buffer.isBuffer(text) ? text : Buffer.from(text), false, { delimiter: ',', encoding });

  it('ends with its last whole line, however lines end', async () => {
    for (const end of ['\n', '\r\n', '\r']) {
      const { looked, problems, header } = await part(['a,b', '1,2', '3,4', '5'].join(end));
      expect([looked.records, problems, header]).toEqual([2, [], ['a', 'b']]);
    }
    const wide = Buffer.from('a,b\r1,2\r3\u0a00', 'utf16le');
    expect((await part(wide, 'utf-16le')).looked.records).toBe(1);
    expect((await part(Buffer.from(wide).swap16(), 'utf-16be')).looked.records).toBe(1);
  });

  it('keeps all of it where no line ends, without calling the cut a fault', async () => {
    const bytes = Buffer.from('name,xé');
    const { header, problems, looked } = await part(bytes.subarray(0, bytes.length - 1));
    expect([header[0], problems, looked.records]).toEqual(['name', [], 0]);
  });

  it('refuses a cell that reading refuses, and none that it takes', async () => {
    for (const [size, codes] of [[mostCellCharacters, []], [mostCellCharacters + 1, ['cell-too-large']]] as const) {
      const { problems } = await part(`a,b\n1,${'x'.repeat(size)}\n`);
      expect(problems.map(({ code }) => code)).toEqual(codes);
    }
  }); // prettier-ignore
});

describe('the rows that a preview judges by', () => {
  const width = 200;
  const header = Array.from({ length: width }, (_, place) => `c${place}`).join(',');
  /** Lines of more than a mebibyte over 2,000: the part that is looked at ends within one of them. */
  const wide = (rows: number, cell: (row: number, column: number) => string): string =>
    Array.from({ length: rows }, (_, row) => Array.from({ length: width }, (_, column) => cell(row, column)).join(',')).join(
      '\n',
    );

  it.each(['utf-8', 'utf-16le', 'windows-1252'] as const)('are whole, where lines are long, in %s', async (encoding) => {
    for (const digits of [4, 7]) {
      const text = `${header}\n${wide(1600, (row, column) => ((row * 7 + column) / 1000).toFixed(digits))}\n`;
      const bytes = Buffer.from(text, encoding === 'windows-1252' ? 'latin1' : encoding === 'utf-8' ? 'utf8' : 'utf16le');
      const looked = 2 * 1024 * 1024;
      const shown = await previewOf(bytes.subarray(0, looked), bytes.length <= looked, { encoding });
      expect(shown.warnings).toEqual([]);
      expect(shown.columns.map(({ kind }) => kind)).toEqual(Array.from({ length: width }, () => 'numeric'));
      const { reason } = shown.reasons.find(({ choice }) => choice === 'delimiter')!;
      const [, alike, of] = /, (\S+) of the first (\S+) rows have/.exec(reason)!;
      expect(alike).toBe(of);
    }
  });

  it('are those before a quoted line break at which the part ends', async () => {
    const cell = (row: number, column: number): string =>
      column === 100 ? `"note\nof ${row}"` : (row + column / 1000).toFixed(4);
    for (const pad of [3, 400, 800]) {
      const bytes = Buffer.from(`${header}\n${`${'0.'.padEnd(pad, '1')}${',2'.repeat(width - 1)}\n`}${wide(1600, cell)}\n`);
      const shown = await previewOf(bytes.subarray(0, 2 * 1024 * 1024), false, {});
      expect([shown.header.length, shown.rows.length]).toEqual([width, 20]);
      expect(shown.warnings).toEqual([]);
    }
  });
});
