import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DraftContent } from '@tallystone/contracts/samples/definition';
import type { Preview } from '@tallystone/contracts/samples/reading';
import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { IntakeServer, type Visitor } from '../support/intake';

let server: IntakeServer;
let modeller: Visitor;
let modelId: string;

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  modelId = await modeller.model();
});
afterAll(() => server.stop());

const rows = (count: number, make: (row: number) => string): string =>
  Array.from({ length: count }, (_, row) => make(row)).join('\n');
const file = (header: string, count: number, make: (row: number) => string): string => `${header}\n${rows(count, make)}\n`;

async function preview(bytes: string | Buffer, choices: Record<string, unknown> = {}): Promise<Preview & { path: string }> {
  const { id } = await modeller.upload(modelId, Buffer.isBuffer(bytes) ? bytes : Buffer.from(bytes));
  const path = `/api/models/${modelId}/samples/${id}`;
  const { body } = await modeller.post(`${path}/preview`).send(choices).expect(200);
  return { ...(body as Preview), path };
}

/** Reads under the proposed choices and gives the problems that the sample is left with. */
async function refused(bytes: string | Buffer, choices: Record<string, unknown> = {}): Promise<ProblemItem[]> {
  const { path, run } = await modeller.sample(modelId, bytes, choices);
  expect(run).toMatchObject({ state: 'failed', problem: { code: 'file-refused' } });
  const { body } = await modeller.get(path).expect(200);
  expect(body).toMatchObject({ state: 'received', rows: null });
  expect((await modeller.get(`${path}/columns`).expect(200)).body.columns).toEqual([]);
  return body.problems as ProblemItem[];
}

describe('encodings', () => {
  const text = file('name_of_town,bad', 30, (row) => `${['Bath', 'Málaga', 'Köln'][row % 3]},${row % 2}`);

  it('takes UTF-8 with a byte-order mark and UTF-16, and says which', async () => {
    const marked = await preview(Buffer.from(`\ufeff${text}`));
    expect(marked).toMatchObject({ choices: { encoding: 'utf-8' }, header: ['name_of_town', 'bad'], problems: [] });
    const wide = Buffer.from(`\ufeff${text}`, 'utf16le');
    expect((await preview(wide)).choices.encoding).toBe('utf-16le');
    const swapped = await modeller.sample(modelId, Buffer.from(wide).swap16());
    expect(swapped.run.state).toBe('succeeded');
    const { body } = await modeller.get(`${swapped.path}/columns`).expect(200);
    expect(body.columns[0].mostFrequent.map(({ value }: { value: string }) => value).sort()).toEqual(['Bath', 'Köln', 'Málaga']);
  });

  it('asks about bytes that are not UTF-8, with the line, and never shows a replacement in the data', async () => {
    const latin = Buffer.from(text, 'latin1');
    const asked = await preview(latin);
    expect(asked.choices.encoding).toBe('windows-1252');
    expect(asked.rows[1].cells[0]).toBe('Málaga');
    const problems = await refused(latin, { encoding: 'utf-8' });
    expect(problems).toMatchObject([{ code: 'not-in-encoding', where: { line: 3, count: 20 } }]);
    expect(problems[0].message).toContain('Line 3 is not UTF-8; read as Windows-1252?');
    const read = await modeller.sample(modelId, latin);
    const { body } = await modeller.get(`${read.path}/columns`).expect(200);
    expect(JSON.stringify(body)).not.toContain('\ufffd');
  });
});

describe('characters that were lost before', () => {
  it('are refused with their lines, in the preview and when the file is read', async () => {
    const text = file('town,bad', 30, (row) => `${row % 10 === 4 ? 'M\ufffdlaga' : 'Bath'},${row % 2}`);
    const { problems, doubtful } = await preview(text);
    expect(problems).toMatchObject([{ code: 'lost-characters', where: { line: 6, lines: '6, 16, 26', count: 3 } }]);
    expect(doubtful.lines[0]).toMatchObject({ line: 6, record: 5, doubts: ['a character that was lost before (U+FFFD)'] });
    expect(await refused(text)).toEqual(problems);
  });
});

describe('rows and headers', () => {
  it('names the first twenty ragged lines and their number', async () => {
    const text = file('a,b,c', 60, (row) => (row % 2 === 0 ? '1,2,3' : '1,2'));
    const { doubtful } = await preview(text);
    expect(doubtful.count).toBe(30);
    expect(doubtful.lines).toHaveLength(30);
    expect(doubtful.lines[0]).toEqual({
      line: 3,
      record: 2,
      text: '1,2',
      clipped: false,
      doubts: ['2 fields where the header has 3'],
    });
    const problems = await refused(text);
    expect(problems).toMatchObject([{ code: 'ragged', where: { line: 3, count: 30 } }]);
    expect(String(problems[0].where.lines).split(', ')).toHaveLength(20);
  });

  it('names the opening line of a quote that is never closed', async () => {
    const problems = await refused(`a,b\n1,2\n3,"four\n5,6\n7,8\n`);
    expect(problems).toMatchObject([{ code: 'unclosed-quote', where: { line: 3, record: 2 } }]);
  });

  it('asks to rename blank, repeated and reserved headers, all together', async () => {
    const problems = await refused(`age,,age,__proto__\n1,2,3,4\n5,6,7,8\n`);
    expect(problems.map(({ code, where }) => [code, where.position])).toEqual([
      ['blank-header', 2],
      ['duplicate-header', 3],
      ['reserved-header', 4],
    ]);
  });

  it('takes quoted line breaks, and tells line and record apart', async () => {
    const text = `note,bad\n"two\nlines",0\nplain,1\n"three\nmore\nlines",0\n`;
    const shown = await preview(text);
    expect(shown.rows.map(({ record, line }) => [record, line])).toEqual([
      [1, 2],
      [2, 4],
      [3, 5],
    ]);
    const { run } = await modeller.sample(modelId, text);
    expect(run).toMatchObject({ state: 'succeeded', result: { rows: 3 } });
    const problems = await refused(`${text}only one field\n`);
    expect(problems).toMatchObject([{ code: 'ragged', where: { line: 8, record: 4 } }]);
  });

  it('reports every kind of problem of one file together', async () => {
    const problems = await refused(
      Buffer.concat([Buffer.from('a,a,c\n1,2\n1,"x"y,3\n1,\0,3\n'), Buffer.from([0xff]), Buffer.from(',2,3\n')]),
      { encoding: 'utf-8', delimiter: ',' },
    );
    expect(problems.map(({ code }) => code).sort()).toEqual([
      'duplicate-header',
      'not-in-encoding',
      'nul-byte',
      'ragged',
      'stray-quote',
    ]);
  });

  it('names line and column of a NUL byte and of a cell over one megabyte', async () => {
    expect(await refused(`a,b\n1,2\n3,4\0\n`)).toMatchObject([
      { code: 'nul-byte', where: { line: 3, column: 'b', position: 2 } },
    ]);
    const most = 1024 ** 2;
    expect(await refused(`a,b\n1,2\n${'x'.repeat(most + 1)},4\n`)).toMatchObject([
      { code: 'cell-too-large', where: { line: 3, record: 2, column: 'a', position: 1 } },
    ]);
    // One that is just as large is shown and read, by the fast reader and by the careful one.
    for (const end of ['\n', '\r']) {
      const text = ['a,b', '1,2', `${'x'.repeat(most)},4`, ''].join(end);
      expect((await preview(text)).problems).toEqual([]);
      expect((await modeller.sample(modelId, text)).run).toMatchObject({ state: 'succeeded', result: { rows: 2 } });
    }
  }, 60_000);

  it('refuses a name that no definition could hold, with its place and length', async () => {
    const text = `a,${'b'.repeat(1001)}\n1,2\n3,4\n`;
    expect((await preview(text)).problems).toMatchObject([{ code: 'header-too-long', where: { position: 2, length: 1001 } }]);
    expect(await refused(text)).toMatchObject([{ code: 'header-too-long', where: { line: 1, position: 2, length: 1001 } }]);
    const { path, run } = await modeller.sample(modelId, file(`bad,${'b'.repeat(1000)}`, 40, (row) => `${row % 2},${row}`));
    expect(run.state).toBe('succeeded');
    await modeller.get(`${path}/draft`).expect(200);
  });

  it('reads lines that end with a carriage return alone, of any size', async () => {
    const text = file('note,amount,bad', 60_000, (row) => `${'x'.repeat(30)},${row % 900},${row % 2}`).replaceAll('\n', '\r');
    expect(text.length).toBeGreaterThan(2 * 1024 * 1024);
    const shown = await preview(text);
    expect(shown).toMatchObject({ problems: [], header: ['note', 'amount', 'bad'], looked: { whole: false } });
    expect(shown.looked.records).toBeGreaterThan(40_000);
    expect((await modeller.sample(modelId, text)).run).toMatchObject({ state: 'succeeded', result: { rows: 60_000 } });
  }, 60_000);

  it('states the limit of columns and what was found', async () => {
    const wide = Array.from({ length: 201 }, (_, k) => `c${k}`);
    const problems = await refused(`${wide.join(',')}\n${wide.map(() => '1').join(',')}\n`);
    expect(problems).toMatchObject([
      { code: 'too-many-columns', message: 'The file has 201 columns; at most 200 can be brought in.' },
    ]);
  });
});

describe('numbers and dates', () => {
  const columnsOf = async (text: string, choices: Record<string, unknown> = {}) => {
    const { path } = await modeller.sample(modelId, text, choices);
    return (await modeller.get(`${path}/columns`).expect(200)).body.columns as {
      kind: string;
      missing: number;
      numeric: { smallest: number } | null;
      flags: { code: string; finding: string }[];
    }[];
  };

  it('never turns an empty field or a blank one into zero', async () => {
    const [amount] = await columnsOf(
      file('amount,bad', 40, (row) => `${['5', '', '" "', '7'][row % 4]},${row % 2}`),
      { missing: [''] },
    );
    expect(amount.missing).toBe(10);
    expect(amount.numeric?.smallest ?? null).not.toBe(0);
    const [trimmed] = await columnsOf(file('amount,bad', 40, (row) => `${['5', '   ', '""', '7'][row % 4]},${row % 2}`));
    expect(trimmed).toMatchObject({ kind: 'numeric', missing: 20, numeric: { smallest: 5 } });
  });

  it('counts tokens that are no numbers by column, and blocks the column until they are settled', async () => {
    const text = file(
      'amount,bad',
      200,
      (row) => `${row === 17 ? 'NaN' : row === 18 ? '1e309' : row === 19 ? '0x10' : row === 20 ? 'Inf' : row + 10},${row % 2}`,
    );
    const { path } = await modeller.sample(modelId, text, { missing: [''] });
    const { body } = await modeller.get(`${path}/columns`).expect(200);
    const flag = body.columns[0].flags.find(({ code }: { code: string }) => code === 'unreadable-numbers');
    for (const token of ['"NaN"', '"1e309"', '"0x10"', '"Inf"']) expect(flag.finding).toContain(token);
    expect(flag.values).toEqual(['0x10', '1e309', 'Inf', 'NaN']);
    const draft = await modeller.get(`${path}/draft`).expect(200);
    expect(draft.body.problems).toMatchObject([{ code: 'unreadable-numbers', where: { column: 'amount' } }]);
    expect(draft.body.problems[0].message).toContain('Name them as special codes, read the file again with these as missing tokens');
    // Named as missing they are settled.
    const again = await modeller
      .post(`${path}/readings`)
      .send({ ...(await modeller.get(path)).body.reading, missing: ['', ...(flag.values as string[])] })
      .expect(202);
    expect((await modeller.ended(again.body.id)).state).toBe('succeeded');
    const settled = await modeller.get(`${path}/draft`).expect(200);
    expect(settled.body.problems).toEqual([]);
    expect((await modeller.get(`${path}/columns`)).body.columns[0]).toMatchObject({ missing: 4, numeric: { smallest: 10 } });
  });

  it('judges the decimal sign from the file, to be confirmed', async () => {
    const text = `betrag;bad\n${rows(50, (row) => `${row + 1}.${String(100 + row)},${row % 10}5;${row % 2}`)}\n`;
    const shown = await preview(text);
    expect(shown.choices).toMatchObject({ delimiter: ';', decimal: ',', thousands: '.' });
    expect(shown.columns[0].kind).toBe('numeric');
    const [amount] = await columnsOf(text);
    expect(amount.numeric?.smallest).toBe(1100.05);
    const refusedSigns = await modeller
      .post(`${shown.path}/readings`)
      .send({ ...shown.choices, thousands: ',' })
      .expect(422);
    expect(refusedSigns.body.problems[0].code).toBe('signs-equal');
  });

  it('asks about thousands signs that stand only beyond what the preview looks at', async () => {
    const text = file('amount,bad', 60_000, (row) => `${row < 3000 ? (row % 990) + 1 : `1.${(row % 800) + 100}`},${row % 2}`);
    expect((await preview(text)).warnings).toEqual([]);
    const [amount] = await columnsOf(text);
    expect(amount).toMatchObject({ kind: 'numeric', numeric: { smallest: 1 } });
    expect(amount.flags).toMatchObject([{ code: 'ambiguous-numbers', weight: 'look' }]);
    expect(amount.flags[0].finding).toContain('each of the 57\u202f000 values with “.” has exactly three digits after it');
    const [answered] = await columnsOf(text, { decimal: ',', thousands: '.' });
    expect(answered).toMatchObject({ kind: 'numeric', numeric: { largest: 1899 }, flags: [] });
  });

  it.each([
    ['a no-break blank', '\u00a0', '\u00a0'],
    ['a narrow blank', '\u202f', '\u202f'],
    ['a typed apostrophe', "'", "'"],
    ['a typeset apostrophe', '\u2019', "'"],
  ])('proposes %s between thousands beside a decimal point', async (_, sign, proposed) => {
    const text = file('amount,bad', 50, (row) => `${row + 1}${sign}000.50,${row % 2}`);
    const { choices, columns } = await preview(text);
    expect(choices).toMatchObject({ decimal: '.', thousands: proposed });
    expect(columns[0]).toMatchObject({ kind: 'numeric', against: null });
    expect((await columnsOf(text))[0]).toMatchObject({ kind: 'numeric', numeric: { smallest: 1000.5, largest: 50_000.5 } });
  });

  it('shows numbers of mixed spelling with examples', async () => {
    const [amount] = await columnsOf(
      file('amount;bad', 60, (row) => `${row % 2 === 0 ? '1,5' : '1.234,56'};${row % 2}`).replace('1.234,56', '12.5'),
      { decimal: '.', thousands: null, delimiter: ';' },
    );
    expect(amount.kind).toBe('categorical');
    expect(amount.flags.map(({ code }) => code)).toContain('numbers-as-text');
  });

  it('refuses mixed decimals as a characteristic, with examples and what to do', async () => {
    const text = file('amount;income;bad', 60, (row) => `${row % 2 === 0 ? `${row % 7},5` : `${row % 7}.5`};${row};${row % 2}`);
    const { path } = await modeller.sample(modelId, text, { decimal: '.', thousands: null, delimiter: ';' });
    const [amount] = (await modeller.get(`${path}/columns`).expect(200)).body.columns as ColumnProfile[];
    expect(amount).toMatchObject({ kind: 'categorical', suggestedRole: 'not used', flags: [{ code: 'mixed-numbers', weight: 'stop' }] });
    expect(amount.flags[0].finding).toMatch(/^Numbers are written in more than one way: "\d[.]5" \d×.* beside "\d,5" \d×.*\. Write them in one way/);
    const draft = await modeller.get(`${path}/draft`).expect(200);
    const content = draft.body.content as DraftContent;
    expect(content.columns[0]).toMatchObject({ role: 'not used', reason: amount.suggestion });
    expect(draft.body.problems).toEqual([]);
    const columns = content.columns.map((one) => (one.column === 'amount' ? { ...one, role: 'characteristic', reason: 'tried' } : one));
    const saved = await modeller.put(`${path}/draft`).set('If-Match', draft.headers.etag).send({ ...content, columns }).expect(200);
    expect(saved.body.problems).toMatchObject([{ code: 'mixed-numbers', message: `amount: ${amount.flags[0].finding}`, where: { column: 'amount' } }]);
    const refusal = await modeller.post(`${path}/definitions`).send({ revision: saved.body.revision as number }).expect(422);
    expect(refusal.body.problems).toMatchObject([{ code: 'mixed-numbers' }]);
  });

  it('asks day or month first', async () => {
    const text = file('applied,bad', 40, (row) => `0${(row % 9) + 1}/04/2024,${row % 2}`);
    const { choices, problems } = await preview(text);
    expect(choices).not.toHaveProperty('dateOrder');
    expect(problems).toMatchObject([{ code: 'date-order', where: { column: 'applied' } }]);
    const [date] = await columnsOf(text);
    expect(date.flags[0]).toMatchObject({ code: 'doubtful-dates' });
    expect(date.flags[0].finding).toContain('day first or month first cannot be told');
  });

  it('sets constant and empty columns to not used with the reason', async () => {
    const { path } = await modeller.sample(
      modelId,
      file('nothing,same,income,bad', 60, (row) => `,x,${row * 3 + 100},${row % 3 === 0 ? 1 : 0}`),
    );
    const { body } = await modeller.get(`${path}/draft`).expect(200);
    expect(body.content.columns.slice(0, 2)).toMatchObject([
      { role: 'not used', reason: 'All 60 values are missing.' },
      { role: 'not used', reason: 'Always "x".' },
    ]);
  });

  it('warns of identifiers that repeat, with the count', async () => {
    const { path } = await modeller.sample(
      modelId,
      file('application_id,income,bad', 200, (row) => `A${row < 4 ? 0 : row},${row * 3},${row % 3 === 0 ? 1 : 0}`),
    );
    const { body } = await modeller.get(`${path}/columns`).expect(200);
    const flag = body.columns[0].flags.find(({ code }: { code: string }) => code === 'repeated-identifiers');
    expect(flag.finding).toContain('3 rows repeat an identifier');
  });

  // A quoted line break makes the careful reader read the second.
  it.each([
    ['fast', 'x'],
    ['carefully', '"two\nlines"'],
  ])('warns of near-duplicate identifiers, with the count, when it reads %s', async (_, note) => {
    const alike: Record<number, string> = { 7: 'ab 1001', 8: 'AB001002', 9: 'AB-1003' };
    const { path } = await modeller.sample(
      modelId,
      file('application_id,note,income,bad', 200, (row) =>
        [alike[row] ?? `AB-${1000 + row}`, row === 50 ? note : 'x', row * 3, row % 3 === 0 ? 1 : 0].join(','),
      ),
    );
    const { body } = await modeller.get(`${path}/columns`).expect(200);
    expect(body.columns[0]).toMatchObject({ hashed: true, distinct: 199 });
    const flag = body.columns[0].flags.find(({ code }: { code: string }) => code === 'near-duplicate-identifiers');
    expect(flag.finding).toContain('2 identifiers differ from others only in how they are written');
  });

  it('says where categories differ only in how they are written', async () => {
    const towns = ['London', 'london ', 'Hull', 'Self-employed', 'self employed', 'A+', 'A-'];
    const [town] = await columnsOf(file('town,bad', 210, (row) => `${towns[row % towns.length]},${row % 3 === 0 ? 1 : 0}`));
    const finding = town.flags.find(({ code }) => code === 'like-categories')?.finding;
    expect(finding).toContain('“London” (30) and “london” (30); “Self-employed” (30) and “self employed” (30).');
    expect(finding).not.toContain('A+');
  });
});
