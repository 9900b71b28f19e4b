import type { DraftContent } from '@tallystone/contracts/samples/definition';
import type { Scorecard } from '@tallystone/contracts/scorecards/schema';
import type { Version } from '@tallystone/contracts/versions/schema';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { applicantsWithRisk, classApplicants } from '../support/binned';
import { IntakeServer, type Visitor } from '../support/intake';
import { choose, fitPath, freeze, makeDocument, scale } from '../support/line';

/** Columns may be called as properties that every object has: a lookup by such a name finds the column's own entry or nothing. */
let server: IntakeServer;
let modeller: Visitor;
let modelId: string;
let fitId: string;
const names = ['constructor', 'toString', 'valueOf', 'hasOwnProperty'];

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  modelId = await modeller.model();
}, 120_000);
afterAll(() => server.stop());

describe('characteristics called constructor, toString, valueOf and hasOwnProperty', () => {
  it('are read, classed and fitted', async () => {
    const csv = applicantsWithRisk().replace(/^[^\n]+/, `application_id,applied_on,${names.join(',')},branch_code,gender,bad`);
    const { path, run } = await modeller.sample(modelId, csv);
    expect(run.state).toBe('succeeded');
    const { body, headers } = await modeller.get(`${path}/draft`).expect(200);
    const draft = body.content as DraftContent;
    const content: DraftContent = {
      ...draft,
      columns: draft.columns.map((column) => {
        if (column.column === 'toString')
          return { ...column, role: 'characteristic', special: [{ label: 'no bureau record', values: [-999] }] };
        return names.includes(column.column) ? { ...column, role: 'characteristic', reason: 'as an example' } : column;
      }),
      partition: { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: null },
    };
    const saved = await modeller.put(`${path}/draft`).set('If-Match', headers.etag).send(content).expect(200);
    expect(saved.body.problems).toEqual([]);
    const started = await modeller
      .post(`${path}/definitions`)
      .send({ revision: saved.body.revision as number })
      .expect(202);
    const { definitionId } = (await modeller.ended(started.body.id as string)).result as { definitionId: string };
    const binning = await classApplicants(modeller, modelId, definitionId);
    const settings = { lambda: { count: 20, smallestRatio: 0.01 }, folds: { count: 3, seed: 1, classing: 'once' } };
    fitId = (await fitPath(modeller, modelId, binning.id, settings)).id;
    const fitted = (await modeller.get(`/api/fits/${fitId}/path`).expect(200)).body as { lambdas: number[] };
    await choose(modeller, fitId, { index: fitted.lambdas.length - 1, rule: 'by hand', reason: 'Keeps all of them' });
  }, 240_000);

  it('give an applicant the label where no text was written, and take fields that are left out as missing', async () => {
    const { body } = await modeller
      .post(`/api/fits/${fitId}/scorecard/applicants`)
      .send({ fields: { toString: '99' } })
      .expect(200);
    expect((body as { points: { column: string }[] }).points.map(({ column }) => column).sort()).toContain('constructor');
    for (const { text } of (body as { reasons: { text: unknown }[] }).reasons) expect(typeof text).toBe('string');
  });

  it('are asked for a text by the gates of a version, and printed without one', async () => {
    const read = await modeller.get(`/api/fits/${fitId}/scorecard`).expect(200);
    const { settings } = read.body as Scorecard;
    await modeller.put(`/api/fits/${fitId}/scorecard`).set('If-Match', read.headers.etag).send(settings).expect(200);
    const frozen = await freeze(modeller, modelId, fitId);
    const gate = ({ gates }: Version) => gates[0].items.find(({ code }) => code === 'reason-texts');
    expect(gate(frozen)).toMatchObject({ holds: false });
    expect(gate(frozen)?.detail).toContain('constructor');
    await makeDocument(modeller, frozen.id);
    await scale(modeller, fitId);
    const written = await freeze(modeller, modelId, fitId, 'With texts');
    expect(gate(written)).toMatchObject({ holds: true });
    await makeDocument(modeller, written.id);
  }, 240_000);
});
