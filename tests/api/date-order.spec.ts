import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { ColumnList } from '@tallystone/contracts/samples/columns';
import type { Definition, DraftContent } from '@tallystone/contracts/samples/definition';
import type { Preview } from '@tallystone/contracts/samples/reading';
import type { Specification } from '@tallystone/contracts/specification/types';
import type { ValidationWork } from '@tallystone/contracts/validation/schema';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { builtPath } from '../support/built-server';
import { applicantsWithRisk, classApplicants, defineApplicants } from '../support/binned';
import { IntakeServer, type Visitor } from '../support/intake';
import { act, choose, fitPath, freeze, replicate, scale, writeTexts } from '../support/line';

/** A file whose dates are written day first is the same sample as one with ISO dates, from the preview to the replication. */

let server: IntakeServer;
let modeller: Visitor;
let validator: Visitor;
let modelId: string;

const iso = applicantsWithRisk(1500);
/** The same file, its dates written in the way of each row: 3/4/2024, 03.04.2024, 03-04-2024. */
const dayFirst = iso.split('\n').map((line, row) => line.replace(/,(\d{4})-(\d\d)-(\d\d),/, (_, year: string, month: string, day: string) => {
  if (row % 3 === 0) return `,${Number(day)}/${Number(month)}/${year},`;
  return `,${[day, month, year].join(row % 3 === 1 ? '.' : '-')},`;
})).join('\n'); // prettier-ignore

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  validator = await server.signIn('vera', 'validator');
  modelId = await modeller.model();
}, 120_000);
afterAll(() => server.stop());

const columnsOf = async (path: string): Promise<ColumnList> =>
  (await modeller.get(`${path}/columns`).expect(200)).body as ColumnList;
const definitionOf = async (csv: string): Promise<Definition> => {
  const { sampleId, definitionId } = await defineApplicants(modeller, modelId, csv);
  return (await modeller.get(`/api/models/${modelId}/samples/${sampleId}/definitions/${definitionId}`).expect(200))
    .body as Definition;
};

/**
 * Fits, freezes and replays a definition: from the file by the command, and by the validator's run from the file as it is stored. Both come to the numbers of
 * the version.
 */
async function replays({ id, counts }: Definition, csv: string): Promise<Specification> {
  const { id: binningId } = await classApplicants(modeller, modelId, id);
  const fit = await fitPath(modeller, modelId, binningId, { folds: { count: 5, seed: 1, classing: 'woe' } });
  const path = (await modeller.get(`/api/fits/${fit.id}/path`).expect(200)).body as { crossValidation: { minimum: number } };
  await choose(modeller, fit.id, { index: path.crossValidation.minimum, rule: 'minimum' });
  await scale(modeller, fit.id);
  const version = await freeze(modeller, modelId, fit.id);
  const specification = await modeller.get(`/api/versions/${version.id}/specification`).expect(200);
  if (counts.partitions.outOfTime.rows > 0) {
    const opening = { reason: 'The scorecard is frozen: how does it do?' };
    await modeller.post(`/api/sample-definitions/${id}/out-of-time`).send(opening).expect(201);
  }
  const result = await modeller.get(`/api/versions/${version.id}/result`).expect(200);

  const folder = mkdtempSync(join(tmpdir(), 'tallystone-dates-'));
  try {
    const at = (name: string): string => join(folder, name);
    writeFileSync(at('spec.json'), specification.text);
    writeFileSync(at('result.json'), result.text);
    writeFileSync(at('sample.csv'), csv);
    const args = [
      '--specification',
      at('spec.json'),
      '--data',
      at('sample.csv'),
      '--out',
      at('own.json'),
      '--expect',
      at('result.json'),
    ];
    const printed = execFileSync(process.execPath, [builtPath('cli/replicate'), ...args], {
      encoding: 'utf8',
    });
    expect(printed).toContain('all equal');
  } finally {
    rmSync(folder, { recursive: true });
  }

  await writeTexts(modeller, version.id);
  await act(modeller, version.id, { act: 'submit', statement: 'Ready for review' });
  await act(validator, version.id, { act: 'start', statement: 'Full scope' });
  await replicate(validator, version.id, 'same code');
  const { replications } = (await validator.get(`/api/versions/${version.id}/validation`).expect(200)).body as ValidationWork;
  expect(replications).toMatchObject([{ matches: true, differing: 0, scoresEqual: true }]);
  return JSON.parse(specification.text) as Specification;
}

describe('dates written day first', () => {
  it('are proposed with the value that decides, and read as ISO dates by both readers', async () => {
    const read = await modeller.sample(modelId, dayFirst);
    expect(read.run.state).toBe('succeeded');
    const { body } = await modeller.post(`${read.path}/preview`).send({}).expect(200);
    const { choices, reasons } = body as Preview;
    expect(choices.dateOrder).toBe('day-month-year');
    expect(reasons.find(({ choice }) => choice === 'dateOrder')?.reason).toContain('can only be day first');
    const plain = await columnsOf(read.path);
    // Lines that end with a carriage return alone are left to the careful reader.
    const careful = await modeller.sample(modelId, dayFirst.replaceAll('\n', '\r'));
    expect(await columnsOf(careful.path)).toEqual(plain);
    expect(await columnsOf((await modeller.sample(modelId, iso)).path)).toEqual(plain);
    const date = plain.columns.find(({ column }) => column === 'applied_on');
    expect(date).toMatchObject({
      kind: 'date',
      suggestedRole: 'application date',
      date: { first: expect.stringMatching(/^2023-01-0\d$/) as string },
    });
  }, 120_000);

  it('are refused with line and record where there is no such day', async () => {
    const lines = dayFirst.split('\n');
    lines[700] = lines[700].replace(/,\d+[./-]\d+[./-]\d{4},/, ',31/04/2024,');
    const { path, run } = await modeller.sample(modelId, lines.join('\n'));
    expect(run).toMatchObject({ state: 'failed', problem: { code: 'file-refused' } });
    const { body } = await modeller.get(path).expect(200);
    expect(body.problems).toMatchObject([
      { code: 'no-such-date', where: { line: 701, record: 700, column: 'applied_on', position: 2 } },
    ]);
  }, 60_000);

  it('split out-of-time as ISO dates do, and the version replays from the file to the same numbers', async () => {
    const [mine, other] = [await definitionOf(dayFirst), await definitionOf(iso)];
    expect(mine.counts).toEqual(other.counts);
    expect(mine.counts.partitions.outOfTime.rows).toBeGreaterThan(100);

    const specification = await replays(mine, dayFirst);
    expect(specification.data.dateOrder).toBe('day-month-year');
  }, 240_000);

  it.each([
    ['ISO 8601', (day: string, row: number) => `${day}${['T10:15:00Z', ' 10:15', 'T23:59:59.5-05:00'][row % 3]}`, 'year-month-day'],
    ['the year first', (day: string) => day.replaceAll('-', '/'), 'year-month-day'],
    ['the day first', (day: string) => `${day.split('-').reverse().join('/')} 10:15:33`, 'day-month-year'],
  ] as const)('with a time, or with the year first, are proposed as their day and read so by both readers: %s', async (_, write, dateOrder) => {
    const timed = iso.split('\n').map((line, row) => line.replace(/,(\d{4}-\d\d-\d\d),/, (__, day: string) => `,${write(day, row)},`)).join('\n');
    const read = await modeller.sample(modelId, timed);
    expect(read.run.state).toBe('succeeded');
    const { choices, warnings } = (await modeller.post(`${read.path}/preview`).send({}).expect(200)).body as Preview;
    expect(choices).toMatchObject({ dateOrder, dateTimes: 'day' });
    expect(warnings).toMatchObject([{ code: 'date-times', where: { column: 'applied_on' } }]);
    const expected = await columnsOf((await modeller.sample(modelId, iso)).path);
    expect(await columnsOf(read.path)).toEqual(expected);
    expect(await columnsOf((await modeller.sample(modelId, timed.replaceAll('\n', '\r'))).path)).toEqual(expected);
    const kept = (await columnsOf((await modeller.sample(modelId, timed, { dateTimes: 'text', dateOrder: 'year-month-day' })).path)).columns.find(({ column }) => column === 'applied_on');
    expect(kept).toMatchObject({ kind: 'categorical', hashed: false });
  }, 120_000); // prettier-ignore

  it('are no dates where only ISO dates are', async () => {
    const { path } = await modeller.sample(modelId, dayFirst, { dateOrder: 'year-month-day' });
    const date = (await columnsOf(path)).columns.find(({ column }) => column === 'applied_on');
    expect(date).toMatchObject({ kind: 'categorical', flags: [{ code: 'doubtful-dates' }] });
    expect(date?.flags[0].finding).toContain('read the file again with their date order');
  }, 60_000);
});

describe('reference numbers in the form of dates, beside dates', () => {
  // Two of them are days, in one order or in both: read as dates they would be other texts.
  const codes = ['18-58-9762', '47-10-7838', '10-07-1938', '25-12-2001', '88-31-4410', '62-77-1190'];
  const place = iso.slice(0, iso.indexOf('\n')).split(',').indexOf('branch_code');
  const codeOf = (line: string, row: number): string => codes[(line.endsWith(',1') ? row % 2 : row) % codes.length];
  const withCodes = dayFirst
    .split('\n')
    .map((line, row) => (row === 0 || line === '' ? line : line.split(',').with(place, codeOf(line, row)).join(',')))
    .join('\n');

  it('stay as they are in both readers, in the definition, and in the version when it replays', async () => {
    const { path, run } = await modeller.sample(modelId, withCodes);
    expect(run).toMatchObject({ state: 'succeeded' });
    const plain = await columnsOf(path);
    expect(await columnsOf((await modeller.sample(modelId, withCodes.replaceAll('\n', '\r'))).path)).toEqual(plain);
    const kindOf = (name: string): unknown => plain.columns.find(({ column }) => column === name)?.kind;
    expect([kindOf('branch_code'), kindOf('applied_on')]).toEqual(['categorical', 'date']);
    const found = plain.columns.find(({ column }) => column === 'branch_code');
    expect(found?.mostFrequent.map(({ value }) => value).sort()).toEqual([...codes].sort());
    expect(found?.flags.map(({ code }) => code)).not.toContain('doubtful-dates');

    const definition = await definitionOf(withCodes);
    expect(definition.content.data).toMatchObject({ dateOrder: 'day-month-year', notDates: ['branch_code'] });
    const { data, characteristics } = await replays(definition, withCodes);
    expect(data.notDates).toEqual(['branch_code']);
    const groups = JSON.stringify(characteristics.find(({ column }) => column === 'branch_code'));
    for (const code of codes) expect(groups).toContain(code);
  }, 240_000);
});

describe('dates with a time', () => {
  const clocks = ['T10:15:00Z', ' 10:15', 'T23:59:59.5-05:00'];
  const timed = iso.split('\n').map((line, row) => line.replace(/,(\d{4}-\d\d-\d\d),/, (_, day: string) => `,${row % 4 === 3 ? day.replaceAll('-', '/') : day + clocks[row % 4]},`)).join('\n'); // prettier-ignore

  it('that were read as their day split out-of-time as ISO dates do, and the version replays to the same numbers', async () => {
    const [mine, other] = [await definitionOf(timed), await definitionOf(iso)];
    expect(mine.counts).toEqual(other.counts);
    expect(mine.counts.partitions.outOfTime.rows).toBeGreaterThan(100);
    const { data } = await replays(mine, timed);
    expect(data).toMatchObject({ dateTimes: 'day' });
    expect(data).not.toHaveProperty('dateOrder');
  }, 240_000);

  it('that were kept as texts are categories and values of rules, in the version and when it replays', async () => {
    const batches = ['2024-03-04 09:00', '2024-03-04 17:30', '2024-03-05T09:00:00Z', '2024/03/05', '2024-03-06 09:00'];
    // Two batches of one day with a risk of their own: read as days they would be one.
    const batchOf = (line: string, row: number): string => batches[line.endsWith(',1') ? row % 2 : row % 5];
    const text = iso.split('\n').map((line, row) => (line === '' ? '' : `${row === 0 ? 'batch' : batchOf(line, row)},${line}`)).join('\n'); // prettier-ignore
    const { path } = await modeller.sample(modelId, text, { dateTimes: 'text' });
    const batch = (await columnsOf(path)).columns.find(({ column }) => column === 'batch');
    expect(batch).toMatchObject({ kind: 'categorical', hashed: false });
    const { body, headers } = await modeller.get(`${path}/draft`).expect(200);
    const draft = body.content as DraftContent;
    const content: DraftContent = {
      ...draft,
      columns: draft.columns.map((entry) => {
        const role = ['batch', 'age', 'home'].includes(entry.column) ? 'characteristic' : entry.column === 'bad' ? 'outcome' : 'not used';
        return { ...entry, role, reason: 'as an example' };
      }),
      exclusions: [{ reason: 'A batch that was entered twice', combine: 'all', tests: [{ column: 'batch', in: ['2024/03/05'] }] }],
      partition: { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: null },
    }; // prettier-ignore
    const saved = await modeller.put(`${path}/draft`).set('If-Match', headers['etag']).send(content).expect(200);
    expect(saved.body.problems).toEqual([]);
    const started = await modeller.post(`${path}/definitions`).send({ revision: saved.body.revision }).expect(202);
    const run = await modeller.ended(started.body.id as string);
    const { definitionId } = run.result as { definitionId: string };
    const definition = (await modeller.get(`${path}/definitions/${definitionId}`).expect(200)).body as Definition;
    const excluded = text.split('\n').filter((line) => line.startsWith('2024/03/05,')).length;
    expect(excluded).toBeGreaterThan(50);
    expect(definition.counts.waterfall.find(({ kind }) => kind === 'exclusion')).toMatchObject({
      label: 'A batch that was entered twice',
      out: excluded,
    });

    const { data, characteristics } = await replays(definition, text);
    // What is left out means the same: no specification gets another fingerprint for saying no.
    expect(data).not.toHaveProperty('dateTimes');
    const groups = characteristics.find(({ column }) => column === 'batch');
    expect(groups).toMatchObject({ kind: 'categorical' });
    expect(JSON.stringify(groups)).toContain('2024-03-04 17:30');
  }, 240_000);
});
