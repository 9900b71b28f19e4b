import type { DraftContent } from '@tallystone/contracts/samples/definition';
import type { Dictionary, DictionaryEntry } from '@tallystone/contracts/samples/dictionary';
import { parse } from 'csv-parse/sync';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { defineApplicants } from '../support/binned';
import { IntakeServer, type Visitor } from '../support/intake';

let server: IntakeServer;
let modeller: Visitor;
let validator: Visitor;
let other: Visitor;
let modelId: string;
let path: string;
let definitionId: string;
let sampleId: string;

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  validator = await server.signIn('vera', 'validator');
  other = await server.signIn('oswin', 'modeller');
  modelId = await modeller.model();
  ({ definitionId, sampleId } = await defineApplicants(modeller, modelId));
  path = `/api/models/${modelId}/samples/${sampleId}`;
}, 240_000);
afterAll(() => server.stop());

const entry = (column: string, change: Partial<DictionaryEntry> = {}): DictionaryEntry => ({
  column,
  label: '',
  unit: '',
  description: '',
  treatments: [],
  ...change,
});
const read = async (): Promise<{ dictionary: Dictionary; etag: string }> => {
  const { body, headers } = await modeller.get(`${path}/dictionary`).expect(200);
  return { dictionary: body as Dictionary, etag: headers.etag };
};
const draft = async (of = path): Promise<DraftContent> =>
  (await modeller.get(`${of}/draft`).expect(200)).body.content as DraftContent;
const file = async (): Promise<string> => (await modeller.get(`${path}/dictionary/file`).expect(200)).text;
const take = async (text: string) =>
  modeller
    .post(`${path}/dictionary/file`)
    .set('If-Match', (await read()).etag)
    .send({ text });

describe('the data dictionary of a sample', () => {
  it('is empty at first, and saved under its tag alone', async () => {
    const { dictionary, etag } = await read();
    expect(dictionary).toMatchObject({ entries: [], revision: 0, carried: null, abilities: ['edit'] });
    const entries = [
      entry('utilisation', {
        label: 'Card utilisation',
        unit: '%',
        description: 'Balance over limit, all cards.',
        treatments: [{ code: '-999', treatment: 'neutral points' }],
      }),
      entry('home', { label: '=1+1', description: ' @SUM(A1) behind a blank' }),
    ];
    await modeller.put(`${path}/dictionary`).send({ entries }).expect(428);
    await modeller.put(`${path}/dictionary`).set('If-Match', etag).send({ entries }).expect(200);
    await modeller.put(`${path}/dictionary`).set('If-Match', etag).send({ entries: [] }).expect(412);
    await validator.put(`${path}/dictionary`).set('If-Match', etag).send({ entries }).expect(403);
    await other.get(`${path}/dictionary`).expect(404);
    const { body } = await modeller.get(`/api/record?modelId=${modelId}&entityId=${sampleId}&limit=5`).expect(200);
    expect(body.entries[0]).toMatchObject({ action: 'sample.dictionary-saved', after: { columns: ['utilisation', 'home'], from: 'page' } });
  }); // prettier-ignore

  it('tells the labels of a definition to everyone who reads the model', async () => {
    const { body } = await validator.get(`/api/sample-definitions/${definitionId}/labels`).expect(200);
    expect(body.labels).toEqual([
      { column: 'utilisation', label: 'Card utilisation', unit: '%' },
      { column: 'home', label: '=1+1', unit: '' },
    ]);
    await other.get(`/api/sample-definitions/${definitionId}/labels`).expect(404);
  });

  it('leaves as CSV in which nothing is a formula, and comes back the same', async () => {
    const text = await file();
    const [headings, ...lines]: string[][] = parse(text, { bom: true });
    expect(headings).toEqual(['column', 'kind', 'role', 'label', 'unit', 'description', 'code', 'meaning', 'treatment']);
    expect(lines).toHaveLength(9);
    for (const cell of lines.flat()) expect(cell).not.toMatch(/^\s*[=+\-@]/);
    expect(lines.find(([column]) => column === 'home')?.[3]).toBe("'=1+1");
    expect(lines.find(([column]) => column === 'utilisation')?.slice(6)).toEqual(["'-999", 'no bureau record', 'neutral points']);
    const before = { dictionary: (await read()).dictionary.entries, draft: await draft() };
    const { status } = await take(text);
    expect(status).toBe(200);
    expect({ dictionary: (await read()).dictionary.entries, draft: await draft() }).toEqual(before);
  });

  it('takes labels, roles and codes from a file, and leaves alone what the file does not name', async () => {
    const { status } = await take(
      'column,label,role,code,meaning,treatment\nage,Age when applying,segment,,,\nutilisation,Utilisation,,-999,no bureau record,as before\nutilisation,,,-998,no card,worst points\n',
    );
    expect(status).toBe(200);
    const { dictionary } = await read();
    expect(dictionary.entries.find(({ column }) => column === 'utilisation')).toEqual(
      entry('utilisation', {
        label: 'Utilisation',
        unit: '%',
        description: 'Balance over limit, all cards.',
        treatments: [
          { code: '-999', treatment: 'as before' },
          { code: '-998', treatment: 'worst points' },
        ],
      }),
    );
    expect(dictionary.entries.find(({ column }) => column === 'home')?.label).toBe('=1+1');
    const { columns } = await draft();
    expect(columns.find(({ column }) => column === 'age')?.role).toBe('segment');
    expect(columns.find(({ column }) => column === 'utilisation')?.special).toEqual([
      { label: 'no bureau record', values: [-999] },
      { label: 'no card', values: [-998] },
    ]);
  });

  it('refuses a file with every problem, its line and its heading, and changes nothing', async () => {
    const before = { read: await read(), draft: await draft() };
    const { status, body } = await take(
      [
        'column,kind,role,code,meaning',
        'nowhere,,,,',
        'age,categorical,hero,,',
        'utilisation,,,ten,ten of them',
        '"utilisation",,characteristic,-999,',
        'home,,outcome,,',
        'region,,',
      ].join('\n'),
    );
    expect(status).toBe(422);
    expect(body.problems.map(({ code, where }: { code: string; where: object }) => [code, where])).toEqual([
      ['no-such-column', { line: 2, column: 'column' }],
      ['other-kind', { line: 3, column: 'kind' }],
      ['no-such-role', { line: 3, column: 'role' }],
      ['contradiction', { line: 5, column: 'role' }],
      ['no-meaning', { line: 5, column: 'meaning' }],
      ['role-twice', { line: 6, column: 'role' }],
      ['field-count', { line: 7 }],
    ]);
    expect({ read: await read(), draft: await draft() }).toEqual(before);
    for (const [text, code] of [
      ['label\nAge\n', 'no-column-heading'],
      ['column,colour\nage,red\n', 'no-such-heading'],
      ['column,label\nage,"Age\n', 'not-csv'],
    ]) {
      const refused = await take(text);
      expect(refused.status, text).toBe(422);
      expect(refused.body.problems.map((problem: { code: string }) => problem.code)).toContain(code);
    }
  });

  it('takes a file whose fields semicolons or tabs part', async () => {
    for (const [text, label] of [
      ['\ufeffcolumn;label;unit\r\nage;"Age; when applying";years, full\r\n', 'Age; when applying'],
      ['"column"\t"label"\t"unit"\nage\tAge\tyears, full\n', 'Age'],
    ]) {
      const { status } = await take(text);
      expect(status, text).toBe(200);
      const age = (await read()).dictionary.entries.find(({ column }) => column === 'age');
      expect([age?.label, age?.unit]).toEqual([label, 'years, full']);
    }
    const { status, body } = await take('column|label\nage|Age\n');
    expect([status, body.problems]).toEqual([
      422,
      [
        {
          code: 'no-such-heading',
          message: expect.stringMatching(/^Line 1: "column\|label" is no heading .*parted by commas, semicolons or tabs\.$/) as string,
          where: { line: 1 },
        },
      ],
    ]);
  });

  it('refuses a file in which characters were lost, with each of its lines', async () => {
    const before = { read: await read(), draft: await draft() };
    const { status, body } = await take('column,label\nage,\ufffdge\nhome,Home\nregion,"R\ufffdgion"\n');
    expect(status).toBe(422);
    expect(body.problems.map(({ code, where }: { code: string; where: object }) => [code, where])).toEqual([
      ['lost-characters', { line: 2 }],
      ['lost-characters', { line: 4 }],
    ]);
    expect({ read: await read(), draft: await draft() }).toEqual(before);
  });

  it('is carried over to a later sample for columns of the same name and kind, and says what was not', async () => {
    const csv = ['applied_on,age,utilisation,home,region,postcode,bad'];
    for (let row = 0; row < 300; row++)
      csv.push(`2026-0${1 + (row % 9)}-11,${row % 2 === 0 ? 'young' : 'old'},${row % 9 === 0 ? -999 : row},${['owner', 'rent'][row % 2]},north,P${row % 7},${row % 5 === 0 ? 1 : 0}`);
    const later = await modeller.sample(modelId, `${csv.join('\n')}\n`);
    const { body } = await modeller.get(`${later.path}/dictionary`).expect(200);
    const { carried, entries, savedAt } = body as Dictionary;
    expect(savedAt).toBeNull();
    expect(carried).toMatchObject({ sampleId, columns: ['applied_on', 'utilisation', 'home', 'bad'] });
    expect(Object.fromEntries(carried!.notCarried.map(({ column, why }) => [column, why]))).toMatchObject({
      age: 'It is categorical here, and was numeric.',
      branch_code: 'This sample has no such column.',
      region: expect.stringMatching(/^Here it cannot be used: Always "north"/),
      postcode: 'New: the earlier sample has no such column.',
    });
    expect(entries.map(({ column }) => column)).toEqual(['utilisation', 'home']);
    const { columns } = await draft(later.path);
    // What is confirmed is carried, not what was only drafted afterwards: the code -998 is in no definition.
    expect(columns.find(({ column }) => column === 'utilisation')).toMatchObject({ role: 'characteristic', special: [{ label: 'no bureau record', values: [-999] }] });
  }); // prettier-ignore

  it('takes words from a later sample that has them and no definition, beside roles from the one that is confirmed', async () => {
    const csv = ['applied_on,utilisation,home,bad'];
    for (let row = 0; row < 300; row++)
      csv.push(`2026-0${1 + (row % 9)}-12,${row % 9 === 0 ? -999 : row},${['owner', 'rent'][row % 2]},${row % 5 === 0 ? 1 : 0}`);
    const worded = await modeller.sample(modelId, `${csv.join('\n')}\n`);
    const { headers } = await modeller.get(`${worded.path}/dictionary`).expect(200);
    const entry = { column: 'home', label: 'Home, as stated', unit: '', description: '', treatments: [] };
    await modeller.put(`${worded.path}/dictionary`).set('If-Match', headers.etag).send({ entries: [entry] }).expect(200);
    const last = await modeller.sample(modelId, `${csv.join('\n')}\n2026-01-01,1,owner,0\n`);
    const { body } = await modeller.get(`${last.path}/dictionary`).expect(200);
    const { carried, entries } = body as Dictionary;
    expect(entries).toEqual([entry]);
    expect(carried).toMatchObject({ sampleId, wordsFrom: 'applicants.csv' });
    expect((await draft(last.path)).columns.find(({ column }) => column === 'utilisation')?.special).toEqual([{ label: 'no bureau record', values: [-999] }]);
  });

  it('takes words alone where no earlier sample has a definition', async () => {
    const other = await modeller.model('Words alone');
    const csv = `a,bad\n${Array.from({ length: 60 }, (_, row) => `${row},${row % 3 === 0 ? 1 : 0}`).join('\n')}\n`;
    const first = await modeller.sample(other, csv);
    const { headers } = await modeller.get(`${first.path}/dictionary`).expect(200);
    const entry = { column: 'a', label: 'Age', unit: 'years', description: '', treatments: [] };
    await modeller.put(`${first.path}/dictionary`).set('If-Match', headers.etag).send({ entries: [entry] }).expect(200);
    const second = await modeller.sample(other, `${csv}61,0\n`);
    const { carried, entries } = (await modeller.get(`${second.path}/dictionary`).expect(200)).body as Dictionary;
    expect(entries).toEqual([entry]);
    expect(carried).toMatchObject({ columns: ['a'], wordsFrom: 'applicants.csv' });
  });
});
