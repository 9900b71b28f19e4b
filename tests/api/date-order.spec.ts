import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { ColumnList } from '@tallystone/contracts/samples/columns';
import type { Definition } from '@tallystone/contracts/samples/definition';
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

    const { id: binningId } = await classApplicants(modeller, modelId, mine.id);
    const fit = await fitPath(modeller, modelId, binningId, { folds: { count: 5, seed: 1, classing: 'woe' } });
    const path = (await modeller.get(`/api/fits/${fit.id}/path`).expect(200)).body as { crossValidation: { minimum: number } };
    await choose(modeller, fit.id, { index: path.crossValidation.minimum, rule: 'minimum' });
    await scale(modeller, fit.id);
    const version = await freeze(modeller, modelId, fit.id);
    const specification = await modeller.get(`/api/versions/${version.id}/specification`).expect(200);
    expect((JSON.parse(specification.text) as Specification).data.dateOrder).toBe('day-month-year');
    const opening = { reason: 'The scorecard is frozen: how does it do?' };
    await modeller.post(`/api/sample-definitions/${mine.id}/out-of-time`).send(opening).expect(201);
    const result = await modeller.get(`/api/versions/${version.id}/result`).expect(200);

    const folder = mkdtempSync(join(tmpdir(), 'tallystone-dates-'));
    try {
      const at = (name: string): string => join(folder, name);
      writeFileSync(at('spec.json'), specification.text);
      writeFileSync(at('result.json'), result.text);
      writeFileSync(at('sample.csv'), dayFirst);
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
