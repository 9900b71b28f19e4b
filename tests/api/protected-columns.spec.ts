import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Binning } from '@tallystone/contracts/binnings/schema';
import type { ProtectedColumns } from '@tallystone/contracts/permissions/schema';
import type { DraftContent } from '@tallystone/contracts/samples/definition';
import type { Version } from '@tallystone/contracts/versions/schema';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { builtPath } from '../support/built-server';
import { applicantsWithRisk, characteristicsOf, classApplicants, defineApplicants } from '../support/binned';
import { IntakeServer, type Visitor } from '../support/intake';
import { choose, fitPath, freeze, key, makeDocument, replicate, scale } from '../support/line';

let server: IntakeServer;
let modeller: Visitor;
let validator: Visitor;
let compliance: Visitor;
/** Somebody of compliance who works on the model as a modeller as well. */
let both: Visitor;
let modelId: string;
let definitionId: string;
let binning: Binning;
let fitId: string;
let version: Version;

/** Of every other applicant the gender goes with the outcome, so that it has bins worth a fit. */
const csv = applicantsWithRisk(800)
  .split('\n')
  .map((line, row) =>
    row > 0 && row % 2 === 0 ? line.replace(/,[fm],([01])$/, (_, bad: string) => `,${bad === '1' ? 'm' : 'f'},${bad}`) : line,
  )
  .join('\n');
const settings = { lambda: { count: 5, smallestRatio: 0.01, earlyStop: false }, folds: { count: 3, seed: 1, classing: 'once' } };
const barred =
  '"gender" is protected: barred until somebody with the role of compliance permits it, with a citation, on the definition of the sample.';
const url = (id = definitionId): string => `/api/sample-definitions/${id}/protected-columns`;
const citation = 'Section 14 of the invented Saltmarsh Lending Act';
const reason = 'Counsel confirmed it for this product.';
const read = async (id = definitionId): Promise<ProtectedColumns> =>
  (await modeller.get(url(id)).expect(200)).body as ProtectedColumns;
const permit = (visitor: Visitor, change: object = {}) =>
  visitor.post(url()).send({ act: 'permitted', column: 'gender', citation, reason, ...change });
const withdraw = (visitor: Visitor, change: object = {}) =>
  visitor.post(url()).send({ act: 'withdrawn', column: 'gender', reason: 'Counsel took it back.', ...change });
const recordOf = async (
  entityId: string,
): Promise<{ action: string; actorName: string; before: unknown; after: unknown; reason: string | null }[]> =>
  (await validator.get(`/api/record?modelId=${modelId}&entityId=${entityId}&limit=200`).expect(200)).body.entries;
const printed = async (versionId: string): Promise<string> => {
  const { documentId } = await makeDocument(modeller, versionId);
  const file = await modeller.get(`/api/documents/${documentId}/file`).buffer(true).expect(200);
  return execFileSync('pdftotext', ['-layout', '-', '-'], {
    input: file.body as Buffer,
    encoding: 'utf8',
    maxBuffer: 1 << 26,
  }).replaceAll(/\s+/g, ' ');
};
const fitted = async (binningId: string): Promise<string> => {
  const { id } = await fitPath(modeller, modelId, binningId, settings);
  await choose(modeller, id, { index: 4, rule: 'by hand', reason: 'as an example' });
  await scale(modeller, id);
  return id;
};

beforeAll(async () => {
  server = await IntakeServer.start();
  modeller = await server.signIn('marian', 'modeller');
  validator = await server.signIn('vera', 'validator');
  compliance = await server.signIn('connie', 'compliance');
  both = await server.signIn('bo', 'compliance', 'modeller');
  modelId = await modeller.model();
  await modeller.post(`/api/models/${modelId}/members`).send({ personId: both.personId }).expect(201);
  ({ definitionId } = await defineApplicants(modeller, modelId, csv, { citation: 'The modeller says so' }));
}, 120_000);
afterAll(() => server.stop());

describe('a protected column', () => {
  it('stays barred by whatever citation its modeller writes', async () => {
    expect(await read()).toEqual({
      definitionId,
      columns: [{ column: 'gender', role: 'characteristic', proposed: 'The modeller says so', permission: null, frozenIn: [] }],
      acts: [],
      unflagged: [],
      abilities: [],
    });
    binning = await classApplicants(modeller, modelId, definitionId);
    expect(binning.barred).toEqual([{ column: 'gender', reason: barred }]);
  }, 60_000);

  it('is permitted by compliance alone, never by somebody who works on the model, and with citation and reason', async () => {
    await permit(modeller).expect(403);
    await permit(validator).expect(403);
    const { body: own } = await permit(both).expect(403);
    expect(own.detail).toContain('You take part in developing this model');
    const { body: bare } = await permit(compliance, { citation: ' ', reason: 'yes' }).expect(422);
    expect(bare.problems.map(({ where }: { where: { field: string } }) => where.field).sort()).toEqual(['citation', 'reason']);
    for (const column of ['age', 'nowhere']) {
      const { body } = await permit(compliance, { column }).expect(422);
      expect(body.problems).toMatchObject([{ code: 'not-protected', where: { field: 'column' } }]);
    }
    expect((await withdraw(compliance).expect(409)).body.code).toBe('not-permitted');
    expect((await read()).acts).toEqual([]);
    const { body } = await permit(compliance).expect(201);
    expect(body).toMatchObject({
      abilities: ['permit'],
      columns: [{ proposed: 'The modeller says so', permission: { act: 'permitted', citation, reason, by: 'connie' } }],
    });
    expect((await permit(compliance).expect(409)).body.code).toBe('permitted-already');
    const [entry] = await recordOf(definitionId);
    expect(entry).toMatchObject({
      action: 'protected-column.permitted',
      actorName: 'connie',
      after: { column: 'gender', citation },
      reason,
    });
    for (const sql of ['DELETE FROM protected_permissions', `UPDATE protected_permissions SET citation = 'another'`])
      await expect(server.context.sequelize.query(sql)).rejects.toThrow(/permission denied/);
  });

  it('takes part once it is permitted, and no longer once that is withdrawn', async () => {
    binning = await classApplicants(modeller, modelId, definitionId);
    expect(binning.barred).toEqual([]);
    expect((await characteristicsOf(modeller, binning.id)).characteristics.map(({ column }) => column)).toContain('gender');
    fitId = await fitted(binning.id);
    await withdraw(modeller).expect(403);
    const { body } = await withdraw(compliance).expect(201);
    expect(body).toMatchObject({
      columns: [{ permission: null }],
      acts: [{ act: 'permitted' }, { act: 'withdrawn', citation, reason: 'Counsel took it back.' }],
    });
    expect((await recordOf(definitionId))[0]).toMatchObject({
      action: 'protected-column.withdrawn',
      before: { column: 'gender', citation },
      reason: 'Counsel took it back.',
    });
    const { body: refused } = await modeller
      .post(`/api/models/${modelId}/fits`)
      .set('Idempotency-Key', key())
      .send({ binningId: binning.id, settings: { name: 'Barred', ...settings } })
      .expect(422);
    expect(refused.problems).toMatchObject([{ message: barred, where: { column: 'gender' } }]);
    const { body: unfrozen } = await modeller
      .post(`/api/models/${modelId}/versions`)
      .set('Idempotency-Key', key())
      .send({ fitId, note: 'Barred' })
      .expect(409);
    expect(unfrozen.problems).toMatchObject([{ code: 'barred-field', message: barred }]);
  }, 60_000);

  it('is frozen with the permission that held, which nobody can withdraw afterwards', async () => {
    await permit(compliance, { citation: 'Section 15 of the invented Saltmarsh Lending Act' }).expect(201);
    version = await freeze(modeller, modelId, fitId);
    const { body } = await withdraw(compliance).expect(409);
    expect(body).toMatchObject({ code: 'frozen-with-it', detail: expect.stringContaining('Version 1 was frozen with "gender"') });
    expect((await read()).columns[0].frozenIn).toEqual([1]);
    const item = version.gates.find(({ act }) => act === 'submit')!.items.find(({ code }) => code === 'no-barred-field')!;
    expect(item).toMatchObject({
      holds: true,
      detail: expect.stringMatching(
        /^"gender" is protected and permitted by connie on \d{4}-\d\d-\d\d: Section 15 of the invented Saltmarsh Lending Act\.$/,
      ),
    });
  }, 60_000);

  it('is named with who permitted it by what replays the specification, and in the document', async () => {
    await replicate(validator, version.id, 'same code');
    const file = async (what: string) => (await validator.get(`/api/versions/${version.id}/${what}`).expect(200)).text;
    const folder = mkdtempSync(join(tmpdir(), 'tallystone-protected-'));
    try {
      const at = (name: string): string => join(folder, name);
      writeFileSync(at('specification.json'), await file('specification'));
      writeFileSync(at('sample.csv'), csv);
      const args = ['--specification', at('specification.json'), '--data', at('sample.csv'), '--out', at('result.json')];
      const told = execFileSync(process.execPath, [builtPath('cli/replicate'), ...args], { encoding: 'utf8' });
      expect(told).toMatch(
        /^"gender" is protected and permitted by connie on \d{4}-\d\d-\d\d: Section 15 of the invented Saltmarsh Lending Act\n800 rows read/,
      );
    } finally {
      rmSync(folder, { recursive: true });
    }
    const text = await printed(version.id);
    expect(text).toContain('gender stands among the characteristics, by permission of compliance alone.');
    expect(text).toMatch(/gender permitted, holds Section 15/);
    expect(text).toMatch(/gender withdrawn Section 14/);
    expect(text).toContain('connie');
  }, 120_000);
});

describe('the same file brought in again', () => {
  let second: { definitionId: string; sampleId: string };

  it('carries the citation over as a proposal, which permits nothing', async () => {
    const { id, path } = await modeller.sample(modelId, csv);
    const { body } = await modeller.get(`${path}/draft`).expect(200);
    const gender = (body.content as DraftContent).columns.find(({ column }) => column === 'gender');
    expect(gender).toMatchObject({ role: 'characteristic', protected: true, citation: 'The modeller says so' });
    const started = await modeller.post(`${path}/definitions`).send({ revision: body.revision as number });
    expect([id, started.status, started.body.problems ?? []]).toEqual([id, 202, []]);
    const { result } = await modeller.ended(started.body.id as string);
    const carried = (result as { definitionId: string }).definitionId;
    expect((await read(carried)).columns).toMatchObject([
      { column: 'gender', proposed: 'The modeller says so', permission: null },
    ]);
    expect((await classApplicants(modeller, modelId, carried)).barred).toEqual([{ column: 'gender', reason: barred }]);
  }, 60_000);

  it('leaves a trace where a column is flagged protected no longer', async () => {
    await modeller
      .post(`/api/sample-definitions/${definitionId}/out-of-time`)
      .send({ reason: 'The first version is frozen: how does it do?' })
      .expect(201);
    second = await defineApplicants(modeller, modelId, csv, { protected: false, reason: 'Flagged by mistake.' });
    const lines = await recordOf(second.definitionId);
    expect(lines).toMatchObject([
      {
        action: 'protected-column.unflagged',
        actorName: 'marian',
        after: { columns: [{ column: 'gender', role: 'characteristic', sample: 2, definition: 1 }] },
        reason: 'gender: Flagged by mistake.',
      },
    ]);
    for (const visitor of [validator, compliance]) {
      const { body } = await visitor.get(url(second.definitionId)).expect(200);
      expect(body).toMatchObject({
        columns: [],
        unflagged: [{ column: 'gender', role: 'characteristic', reason: 'Flagged by mistake.', sample: 2, definition: 1 }],
      });
    }
    // The definitions before it are what they were.
    expect((await read()).unflagged).toEqual([]);
  }, 60_000);

  it('prints that, and every opening of the same rows, in the document of a version made of it', async () => {
    const again = await classApplicants(modeller, modelId, second.definitionId);
    expect(again).toMatchObject({
      barred: [],
      outOfTime: 'covered',
      outOfTimeOpenings: 'opened 1 time, under an earlier definition',
    });
    const frozen = await freeze(modeller, modelId, await fitted(again.id), 'Second version');
    const text = await printed(frozen.id);
    expect(text).toContain(
      'flagged no longer: gender (characteristic; flagged by definition 1 of sample 2; Flagged by mistake.)',
    );
    expect(text).toContain(
      'Before freezing, the out-of-time figures were opened 1 time, under an earlier definition; after it, not at all.',
    );
    expect(text).toMatch(/1 of sample 1, earlier yes act \d+/);
  }, 120_000);
});
