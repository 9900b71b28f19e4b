import { readFileSync } from 'node:fs';
import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { DraftCheck, DraftContent } from '@tallystone/contracts/samples/definition';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { IntakeServer, type Visitor } from '../support/intake';

/** The small files of data-demo/intake, each with one quirk, sent and read like any other; what each must yield is in its README. */
let server: IntakeServer;
let modeller: Visitor;
let modelId: string;

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  modelId = await modeller.model();
});
afterAll(() => server.stop());

const bytesOf = (name: string): Buffer => readFileSync(new URL(`../../data-demo/intake/${name}`, import.meta.url));
const read = (name: string, choices: object = {}) => modeller.sample(modelId, bytesOf(name), { ...choices });
const columnsOf = async (path: string) =>
  (await modeller.get(`${path}/columns`).expect(200)).body.columns as {
    column: string;
    kind: string;
    missing: number;
    numeric: { smallest: number } | null;
    flags: { code: string; finding: string }[];
    specialSuspects: { value: string }[];
    suggestedRole: string;
  }[];

describe('files that are accepted', () => {
  it.each([
    'plain',
    'utf8-bom',
    'utf16-le',
    'utf16-be',
    'crlf',
    'no-last-newline',
    'semicolon',
    'tab',
    'quoted-newlines',
    'formula-like-text',
  ])('%s', async (name) => {
    const { run, path } = await read(`ok/${name}.csv`);
    expect(run).toMatchObject({ state: 'succeeded', result: { rows: 40 } });
    const [first] = await columnsOf(path);
    expect(first.column).not.toMatch(/^\ufeff/);
  });

  it('windows-1252-stated', async () => {
    const { run } = await read('ok/windows-1252-stated.csv', { encoding: 'windows-1252' });
    expect(run).toMatchObject({ state: 'succeeded', result: { rows: 40 } });
  });

  it('decimal-comma, special-codes, constant-and-all-missing', async () => {
    const decimal = await columnsOf((await read('ok/decimal-comma.csv')).path);
    expect(decimal.find(({ column }) => column === 'payment_to_income')?.kind).toBe('numeric');
    const special = await columnsOf((await read('ok/special-codes.csv')).path);
    expect(
      special
        .find(({ column }) => column === 'card_utilisation')
        ?.specialSuspects.map(({ value }) => value)
        .sort(),
    ).toEqual(['-997', '-999']);
    const useless = await columnsOf((await read('ok/constant-and-all-missing.csv')).path);
    expect(
      useless
        .filter(({ suggestedRole }) => suggestedRole === 'not used')
        .map(({ flags }) => flags[0].code)
        .sort(),
    ).toEqual(['all-missing', 'constant']);
  });
});

describe('files that are refused, with everything that is wrong', () => {
  it.each([
    ['empty', 422, 'No rows: the file is empty.'],
    ['header-only', 422, 'No rows: the file has a header and nothing below it.'],
    ['workbook-named', 415, 'This is an Excel file; export it as CSV.'],
    ['pdf-named', 415, 'This is a PDF file; export the data as CSV.'],
  ])('%s, before anything starts', async (name, status, detail) => {
    const bytes = bytesOf(`not-ok/${name}.csv`);
    let answer = await modeller.beginUpload(modelId, bytes.length, `${name}.csv`);
    if (answer.status === 201) answer = await modeller.sendUpload(answer.headers.location, 0, bytes);
    expect([answer.status, answer.body.detail]).toEqual([status, detail]);
  });

  it.each([
    ['ragged', { code: 'ragged', where: { line: 12, count: 2, lines: '12, 13' } }],
    ['unclosed-quote', { code: 'unclosed-quote', where: { line: 8 } }],
    ['duplicate-headers', { code: 'duplicate-header', where: { position: 4, column: 'home' } }],
    ['blank-header', { code: 'blank-header', where: { position: 4 } }],
    ['dangerous-headers', { code: 'reserved-header', where: { position: 3, column: '__proto__' } }],
    ['nul-bytes', { code: 'nul-byte', where: { line: 6, position: 3 } }],
  ])('%s, when it is read', async (name, problem) => {
    const { run, path } = await read(`not-ok/${name}.csv`);
    expect(run.state).toBe('failed');
    const { problems } = (await modeller.get(path).expect(200)).body as { problems: ProblemItem[] };
    expect(problems).toMatchObject([problem]);
  });

  it('windows-1252-unstated, offered as Windows-1252', async () => {
    const { run, path } = await read('not-ok/windows-1252-unstated.csv', { encoding: 'utf-8' });
    expect(run.state).toBe('failed');
    expect((await modeller.get(path)).body.problems[0].message).toContain('Line 13 is not UTF-8; read as Windows-1252?');
  });
});

describe('files that are held until somebody answers', () => {
  it('number-tokens: every token is counted', async () => {
    const columns = await columnsOf((await read('not-ok/number-tokens.csv', { missing: [''] })).path);
    const income = columns.find(({ column }) => column === 'monthly_income');
    const finding = income?.flags.find(({ code }) => code === 'unreadable-numbers')?.finding ?? '';
    for (const token of ['"NaN"', '"Inf"', '"1e309"', '"0x10"', '"\u0661\u0662\u0663"', '" "']) expect(finding).toContain(token);
    expect(income?.numeric?.smallest).toBeGreaterThan(0);
  });

  it('mixed-decimals and ambiguous-dates', async () => {
    const mixed = await columnsOf((await read('not-ok/mixed-decimals.csv')).path);
    expect(mixed.find(({ column }) => column === 'monthly_income')?.flags.map(({ code }) => code)).toContain('mixed-numbers');
    const dates = await columnsOf((await read('not-ok/ambiguous-dates.csv')).path);
    expect(
      dates.some(({ flags }) =>
        flags.some(({ code, finding }) => code === 'doubtful-dates' && finding.includes('day first or month first')),
      ),
    ).toBe(true);
  });

  it.each([
    [
      'negative-weights',
      [
        'weight has weights below zero in 10 rows that need one, the smallest -1. Weights are zero or more: mend them in the file, exclude these rows with a reason (weight is below 0), or give the role to another column.',
        'weight has weights that are no numbers in 10 rows that need one: "NaN". Mend them in the file, read it with other choices, or exclude these rows with a reason (weight is one of these).',
      ],
    ],
    ['zero-weights', ['The weights in "weight" are all zero.']],
  ])('%s: no weights, with the count', async (name, messages) => {
    // What stands for a missing value in a weight is missing; here NaN is to be no token, as in a file that nobody was asked about.
    const lines = bytesOf(`not-ok/${name}.csv`).toString('utf8').trimEnd().split('\n');
    // A sample without a characteristic would be held for that alone.
    const csv = lines.map((line, row) => `${line},${row === 0 ? 'age' : 20 + row}\n`).join('');
    const { path, run } = await modeller.sample(modelId, csv, { missing: [''] });
    expect(run.state).toBe('succeeded');
    const { body, headers } = await modeller.get(`${path}/draft`).expect(200);
    const { content } = body as { content: DraftContent };
    const columns = content.columns.map((column) =>
      column.column === 'weight'
        ? { ...column, role: 'weight', reason: null }
        : column.column === 'age'
          ? { ...column, role: 'characteristic', reason: null }
          : column,
    );
    const saved = await modeller
      .put(`${path}/draft`)
      .set('If-Match', headers.etag)
      .send({ ...content, columns })
      .expect(200);
    const { body: check } = await modeller.post(`${path}/draft/check`).expect(200);
    const of = ({ problems }: { problems: ProblemItem[] }) =>
      problems.filter(({ where }) => where.column === 'weight').map(({ message }) => message);
    expect(of(check as DraftCheck)).toEqual(messages);
    const refused = await modeller.post(`${path}/definitions`).send({ revision: saved.body.revision as number });
    if (refused.status === 202) expect((await modeller.ended(refused.body.id as string)).problem?.message).toContain(messages[0]);
    else expect([refused.status, of(refused.body as DraftCheck)]).toEqual([422, messages]);
  });

  it.each(['one-class-outcome', 'three-value-outcome', 'missing-outcome'])(
    '%s: confirming is blocked with values and counts',
    async (name) => {
      const { path, run } = await read(`not-ok/${name}.csv`);
      expect(run.state).toBe('succeeded');
      const draft = await modeller.get(`${path}/draft`).expect(200);
      expect(draft.body.problems.length).toBeGreaterThan(0);
      await modeller.post(`${path}/definitions`).send({ revision: draft.body.revision }).expect(422);
    },
  );
});
