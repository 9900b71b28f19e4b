import type { KeptSamples } from '@tallystone/contracts/samples/erasure';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { applicantsWithRisk, classApplicants, defineApplicants } from '../support/binned';
import { IntakeServer, type Visitor } from '../support/intake';
import { choose, fitPath, freeze, scale } from '../support/line';

let server: IntakeServer;
let modeller: Visitor;
let validator: Visitor;
let admin: Visitor;
let modelId: string;
let sampleId: string;
let versionId: string;
let path: string;

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  validator = await server.signIn('vera', 'validator');
  admin = await server.signIn('ada', 'admin');
  modelId = await modeller.model();
  const defined = await defineApplicants(modeller, modelId, applicantsWithRisk(800));
  sampleId = defined.sampleId;
  path = `/api/models/${modelId}/samples/${sampleId}`;
  const binning = await classApplicants(modeller, modelId, defined.definitionId);
  const fit = await fitPath(modeller, modelId, binning.id, { lambda: { count: 5, smallestRatio: 0.01, earlyStop: false }, folds: { count: 3, seed: 1, classing: 'once' } });
  await choose(modeller, fit.id, { index: 4, rule: 'by hand', reason: 'as an example' });
  await scale(modeller, fit.id);
  versionId = (await freeze(modeller, modelId, fit.id)).id;
  const { runId } = (await modeller.get(`${path}/quality`).expect(200)).body as { runId: string | null };
  if (runId) await modeller.ended(runId);
}, 240_000); // prettier-ignore
afterAll(() => server.stop());

const counted = async (sql: string): Promise<number> => Number((await server.context.pool.query(sql)).rows[0].count);
const rowsLeft = async (): Promise<number[]> =>
  Promise.all(
    ['raw_chunks', 'column_segments', 'definition_segments', 'binning_codes'].map((table) => counted(`SELECT count(*) FROM ${table}`)),
  );
const reason = 'Retention of applicants’ data ended after seven years.';

describe('erasing the rows of a sample', () => {
  it('is for an admin, with a reason, and cannot be had around the tombstone', async () => {
    await modeller.post(`${path}/erasure`).send({ reason }).expect(403);
    await validator.post(`${path}/erasure`).send({ reason }).expect(403);
    await admin.post(`${path}/erasure`).send({ reason: 'old' }).expect(422);
    await expect(server.context.sequelize.query(`SELECT erase_sample_rows('${sampleId}')`)).rejects.toThrow(/no tombstone/);
    for (const left of await rowsLeft()) expect(left).toBeGreaterThan(0);
    const { body } = await admin.get(`/api/models/${modelId}/kept-samples`).expect(200);
    expect((body as KeptSamples).samples).toMatchObject([{ id: sampleId, rows: 800, versions: 1, erased: null, abilities: ['erase'] }]);
    await admin.get(path).expect(404);
  });

  it('leaves nothing of any row, and everything that was counted', async () => {
    const kept = async (): Promise<unknown[]> =>
      Promise.all(
        ['/quality', '/definitions', ''].map(async (tail) => (await modeller.get(path + tail).expect(200)).body as unknown),
      );
    const before = await kept();
    await admin.post(`${path}/erasure`).send({ reason }).expect(204);
    expect(await rowsLeft()).toEqual([0, 0, 0, 0]);
    expect(await kept()).toEqual(before);
    const { body } = await modeller.get(`${path}/columns`).expect(200);
    expect(body.columns).toHaveLength(9);
    for (const { mostFrequent } of body.columns as { mostFrequent: { count: number }[] }[])
      for (const { count } of mostFrequent) expect(count).toBeGreaterThanOrEqual(5);
    await admin.post(`${path}/erasure`).send({ reason }).expect(409);
    const { body: record } = await modeller.get(`/api/record?modelId=${modelId}&entityId=${sampleId}&limit=5`).expect(200);
    expect(record.entries[0]).toMatchObject({ action: 'sample.erased', actorName: 'ada', reason });
  });

  it('ends replication, which says so with date and reason', async () => {
    const { body } = await validator.post(`/api/versions/${versionId}/replications`).send({ method: 'same code' }).expect(409);
    expect(body).toMatchObject({ code: 'no-longer-replicable' });
    expect(body.detail).toMatch(/^No longer replicable: the rows of the sample were erased on \d{4}-\d\d-\d\d by ada\. Reason: Retention/);
  });
});
