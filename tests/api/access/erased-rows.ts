import { execFileSync } from 'node:child_process';
import type { ColumnList } from '@tallystone/contracts/samples/columns';
import type { KeptSamples } from '@tallystone/contracts/samples/erasure';
import type { Scorecard } from '@tallystone/contracts/scorecards/schema';
import type { Version } from '@tallystone/contracts/versions/schema';
import { Client } from 'pg';
import { beforeAll, expect, it, vi } from 'vitest';
import { allRoutes } from '../../../server/src/routes/index';
import { applicantsWithRisk } from '../../support/binned';
import { heldRuns } from '../../support/held-runs';
import type { IntakeServer, Visitor } from '../../support/intake';
import { key, makeDocument } from '../../support/line';

const reason = 'Retention of applicants’ data ended after seven years';
const words = /^The rows of sample \d, applicants\.csv, were erased on \d{4}-\d\d-\d\d by admin\. Reason: Retention of applicants’ data ended after seven years\. What was counted stays; what needs rows needs a file brought in as a new sample\.$/;
const settings = { lambda: { count: 5, smallestRatio: 0.01, earlyStop: false }, folds: { count: 3, seed: 1, classing: 'once' } };

export interface Erasing {
  readonly server: IntakeServer;
  /** Identifiers by the name of the path's parameter. */
  readonly world: Readonly<Record<string, string>>;
  readonly modeller: Visitor;
  readonly validator: Visitor;
  readonly admin: Visitor;
  readonly compliance: Visitor;
}

/**
 * What becomes of a model, and of every route that is asked about it, once an admin has erased the rows of its sample. Erases them: nothing of the
 * model can be worked on afterwards.
 */
export function describeErasing(open: () => Erasing): void {
  let server: IntakeServer;
  let world: Erasing['world'];
  let modeller: Visitor;
  let validator: Visitor;
  let admin: Visitor;
  let compliance: Visitor;
  let path: string;
  let upload: string;

  const counted = async (sql: string): Promise<number> => Number((await server.context.pool.query(sql)).rows[0].count);
  const rowsLeft = (): Promise<number[]> =>
    Promise.all(['raw_chunks', 'column_segments', 'definition_segments', 'binning_codes'].map((table) => counted(`SELECT count(*) FROM ${table}`)));
  const erase = (path: string, body: object = {}) => admin.post(`${path}/erasure`).send({ reason, fileName: 'applicants.csv', ...body });

  /** The run has ended with the sentence, told once, and its worker has let it go without writing anything more. */
  async function endsOnce(runId: string): Promise<void> {
    expect(await modeller.ended(runId)).toMatchObject({ state: 'failed', problem: { code: 'rows-erased', message: expect.stringMatching(words) } });
    await expect.poll(() => counted(`SELECT count(*) FROM run_attempts WHERE run_id = '${runId}' AND ended_at IS NULL`)).toBe(0);
    expect(await counted(`SELECT count(*) FROM run_events WHERE run_id = '${runId}' AND data ->> 'state' IN ('succeeded', 'failed', 'cancelled')`)).toBe(1);
  }

  beforeAll(async () => {
    ({ server, world, modeller, validator, admin, compliance } = open());
    path = `/api/models/${world['modelId']}/samples/${world['sampleId']}`;
    // What was started before runs to its end.
    await vi.waitUntil(async () => (await counted('SELECT count(*) FROM runs WHERE ended_at IS NULL')) === 0, { timeout: 60_000 });
    const { body, headers } = await modeller.get(`/api/fits/${world['fitId']}/scorecard`).expect(200);
    const reasons = { ...body.settings.reasons, baseline: 'cut-off' };
    await modeller.put(`/api/fits/${world['fitId']}/scorecard`).set('If-Match', headers['etag']).send({ ...body.settings, cutOff: 500, reasons }).expect(200);
    await modeller.post(`/api/sample-definitions/${world['definitionId']}/out-of-time`).send({ reason: 'The scorecard is frozen: how does it do?' }).expect(201);
    const { revision } = (await modeller.get(`${path}/draft`).expect(200)).body as { revision: number };
    const { body: comparing } = await modeller.post(`${path}/draft/balance`).set('Idempotency-Key', key()).send({ revision }).expect(202);
    expect(await modeller.ended(comparing.id)).toMatchObject({ state: 'succeeded' });
    const begun = await modeller.beginUpload(world['modelId'], 20, 'on-its-way.csv').expect(201);
    upload = begun.headers['location'];
    await modeller.sendUpload(upload, 0, Buffer.from('a,bad\n1,0\n')).expect(204);
  }, 120_000);

  it('is for an admin, with a reason and the name of the file, and cannot be had around the tombstone', async () => {
    const body = { reason, fileName: 'applicants.csv' };
    await modeller.post(`${path}/erasure`).send(body).expect(403);
    await validator.post(`${path}/erasure`).send(body).expect(403);
    await erase(path, { reason: 'old' }).expect(422);
    const { body: refused } = await erase(path, { fileName: 'applicants' }).expect(422);
    expect(refused.problems).toMatchObject([{ code: 'another-name', where: { field: 'fileName' } }]);
    await expect(server.context.sequelize.query(`SELECT erase_sample_rows('${world['sampleId']}')`)).rejects.toThrow(/no tombstone/);
    for (const left of await rowsLeft()) expect(left).toBeGreaterThan(0);
    const kept = `/api/models/${world['modelId']}/kept-samples`;
    expect((await admin.get(kept).expect(200)).body).toMatchObject({
      samples: [{ id: world['sampleId'], rows: 800, definitions: 1, binnings: 1, fits: 2, versions: 1, runs: 0, erased: null, abilities: ['erase'] }],
      uploads: [{ fileName: 'on-its-way.csv', arrived: 10, size: 20, from: 'modeller' }],
    });
    // Whose file is on its way is nobody’s business but their own, and retention’s.
    expect((await validator.get(kept).expect(200)).body).toMatchObject({ samples: [{ abilities: [] }], uploads: [] });
    await admin.get(path).expect(404);
  });

  it('leaves nothing of any row, ends what reads them, and keeps everything that was counted', async () => {
    const read = async (tail: string): Promise<Record<string, unknown>> => (await modeller.get(path + tail).expect(200)).body;
    const before = [await read('/quality'), await read('/definitions')];
    const points = (await modeller.get(`/api/fits/${world['fitId']}/scorecard`).expect(200)).body as Scorecard;
    const begin = async (): Promise<string> => {
      const asked = { binningId: world['binningId'], settings: { name: 'Too late', ...settings } };
      return (await modeller.post(`/api/models/${world['modelId']}/fits`).set('Idempotency-Key', key()).send(asked).expect(201)).body.runId as string;
    };
    let waits = '';
    const underWay = await heldRuns.while(
      async () => {
        const first = await begin();
        waits = await begin();
        return first;
      },
      () => erase(path).expect(204),
    );
    for (const runId of [underWay, waits]) await endsOnce(runId);
    const { fits } = (await modeller.get(`/api/models/${world['modelId']}/fits`).expect(200)).body as { fits: { name: string; state: string; problem: string }[] };
    expect(fits.slice(0, 2)).toMatchObject([{ name: 'Too late', state: 'failed', problem: expect.stringMatching(words) }, { name: 'Too late', state: 'failed' }]);
    expect(await counted('SELECT count(*) FROM fit_paths')).toBe(2);
    // What is on its way is another file’s.
    expect(await rowsLeft()).toEqual([1, 0, 0, 0]);
    const after = [await read('/quality'), await read('/definitions')];
    expect([{ ...after[0], abilities: [] }, after[1]]).toEqual([{ ...before[0], abilities: [] }, before[1]]);
    // That partitions of a draft were compared stays; what was never confirmed may name a category of few rows, and goes.
    expect(await read('/draft/balance')).toMatchObject({ last: { characteristics: null }, compared: [{ partition: expect.stringMatching(/^seed|^by/) }] });
    const { columns } = (await modeller.get(`${path}/columns`).expect(200)).body as ColumnList;
    expect(columns).toHaveLength(9);
    for (const { mostFrequent, specialSuspects, missingTokens } of columns)
      for (const { count } of [...mostFrequent, ...specialSuspects, ...missingTokens]) expect(count).toBeGreaterThanOrEqual(5);
    const scorecard = (await modeller.get(`/api/fits/${world['fitId']}/scorecard`).expect(200)).body as Scorecard;
    expect(scorecard.characteristics).toEqual(points.characteristics);
    expect(scorecard).toMatchObject({ bands: [], distribution: null, rounding: null, smallestScore: null, abilities: [], erased: { sample: 1, by: 'admin', reason } });

    const { body: again } = await erase(path).expect(409);
    expect(again).toMatchObject({ code: 'erased-already', detail: expect.stringMatching(words) });
    const { body: kept } = await admin.get(`/api/models/${world['modelId']}/kept-samples`).expect(200);
    expect((kept as KeptSamples).samples).toMatchObject([{ erased: { sample: 1, fileName: 'applicants.csv', by: 'admin', reason }, abilities: [] }]);
    const { body: record } = await modeller.get(`/api/record?modelId=${world['modelId']}&entityId=${world['sampleId']}&limit=5`).expect(200);
    expect(record.entries[0]).toMatchObject({ action: 'sample.erased', actorName: 'admin', reason, detail: { versions: 1, runsEnded: 2 } });
  });

  it('refuses whatever needs rows with the one sentence, through every route', async () => {
    const address = (route: string): string => route.replace(/:(\w+)/g, (_, name: string) => world[name] ?? name);
    const ofRows = /:(sampleId|definitionId|binningId|characteristicId|fitId|versionId)/;
    /** What goes on without rows, each with its reason. */
    const needsNone: Readonly<Record<string, string>> = {
      'POST /api/fits/:fitId/scorecard/applicants': 'points hang on bins alone; reasons counted at the cut-off are refused below',
      'POST /api/versions/:versionId/acts': 'the life of a version; its gates know',
      'PUT /api/versions/:versionId/texts': 'words of the author',
      'POST /api/versions/:versionId/documents': 'made from frozen evidence',
      'POST /api/models/:modelId/samples/:sampleId/erasure': 'erased already, above',
    };
    const changes = allRoutes().filter(({ endpoint }) => endpoint.method !== 'GET' && endpoint.method !== 'HEAD' && ofRows.test(endpoint.path));
    const refused: string[] = [];
    for (const { endpoint } of changes) {
      const route = `${endpoint.method} ${endpoint.path}`;
      if (route in needsNone) continue;
      // What compliance alone may do is asked by compliance.
      const visitor = endpoint.path.endsWith('/protected-columns') ? compliance : modeller;
      const send = visitor[endpoint.method.toLowerCase() as 'post' | 'put' | 'delete'](address(endpoint.path));
      const { status, body } = await send.set('If-Match', '"1"').set('Idempotency-Key', key()).send({});
      expect({ route, status, code: body.code, detail: body.detail }).toEqual({ route, status: 409, code: 'rows-erased', detail: expect.stringMatching(words) });
      refused.push(route);
    }
    // Sample 11, binning 6, fit 2, version 2, out-of-time 1, protected columns 1.
    expect(refused).toHaveLength(23);

    const { modelId, definitionId, binningId, fitId, secondFitId } = world;
    const inference = { ...settings, name: 'Parcelling', declined: { method: 'parcelling', bands: 10, uplift: 1.5, reason: 'as an example' } };
    const bodies: readonly (readonly [string, object])[] = [
      [`/api/models/${modelId}/binnings`, { definitionId, name: 'Another', constraints: {} }],
      [`/api/models/${modelId}/fits`, { binningId, settings: { name: 'Another', ...settings } }],
      [`/api/models/${modelId}/fits`, { binningId, settings: inference }],
      [`/api/models/${modelId}/versions`, { fitId, note: 'Another' }],
      [`/api/fits/${fitId}/scorecard/applicants`, { fields: { age: '40' } }],
    ];
    const asked = [...bodies.map(([to, body]) => modeller.post(to).set('Idempotency-Key', key()).send(body)), modeller.get(`/api/models/${modelId}/comparison?fits=${fitId},${secondFitId}`), modeller.get(`${path}/doubtful-lines`)];
    for (const request of asked) {
      const { status, body } = await request;
      expect({ status, code: body.code, detail: body.detail }, request.url).toEqual({ status: 409, code: 'rows-erased', detail: expect.stringMatching(words) });
    }
    // None of these left a run or a row behind.
    expect(await counted(`SELECT count(*) FROM runs WHERE ended_at IS NULL`)).toBe(0);
    expect(await counted('SELECT count(*) FROM fits')).toBe(4);
    expect(await rowsLeft()).toEqual([1, 0, 0, 0]);
  });

  it('reads on whatever was counted, and offers nothing that cannot work', async () => {
    const routes = allRoutes().filter(({ endpoint }) => endpoint.method === 'GET' && /:(modelId|sampleId|definitionId|binningId|characteristicId|fitId|versionId)/.test(endpoint.path));
    // The file that was on its way, which no erasure of a sample concerns.
    const ids: Record<string, string> = { ...world, uploadId: upload.split('/').at(-1) ?? '' };
    for (const { endpoint } of routes) {
      if (['/comparison', '/doubtful-lines', '/member-candidates'].some((tail) => endpoint.path.endsWith(tail))) continue;
      const query = endpoint.path.endsWith('/quality/column') ? '?column=age' : '';
      const { status, body } = await modeller.get(endpoint.path.replace(/:(\w+)/g, (_, name: string) => ids[name]) + query);
      expect([endpoint.path, status]).toEqual([endpoint.path, 200]);
      const kept = (body.abilities as string[] | undefined) ?? [];
      if (/samples\/:sampleId|binnings\/|fits\/:|out-of-time|validation$/.test(endpoint.path)) expect([endpoint.path, kept]).toEqual([endpoint.path, []]);
    }
    // Figures by month of a binning older than they are would be counted now.
    const owner = new Client({ connectionString: server.database.ownerUrl });
    await owner.connect();
    await owner.query('DELETE FROM binning_months');
    await owner.end();
    const bench = `/api/binnings/${world['binningId']}/characteristics`;
    const { body } = await modeller.get(`${bench}/${world['characteristicId']}/months`).expect(409);
    expect(body).toMatchObject({ code: 'rows-erased', detail: expect.stringMatching(words) });
    await modeller.get(bench).expect(200);
    expect(await counted(`SELECT count(*) FROM runs WHERE kind = 'binning.complete'`)).toBe(0);
  });

  it('marks the version as no longer replicable: in lists, at its gate, in the document', async () => {
    const said = /^No longer replicable: the rows of sample 1, applicants\.csv, were erased on \d{4}-\d\d-\d\d by admin\. Reason: Retention/;
    const version = (await modeller.get(`/api/versions/${world['versionId']}`).expect(200)).body as Version;
    expect(version).toMatchObject({ erased: { by: 'admin', reason } });
    expect(version.abilities).not.toContain('replicate');
    const gate = version.gates.find(({ act }) => act === 'conclude');
    expect(gate).toMatchObject({ open: false, items: [{ holds: false, detail: expect.stringMatching(/^None is recorded\. No longer replicable: the rows/), path: null }] });
    const { body: reviews } = await modeller.get(`/api/models/${world['modelId']}/versions`).expect(200);
    expect(reviews.versions[0].erased).toMatchObject({ reason });
    const { documentId } = await makeDocument(modeller, world['versionId']);
    const file = await modeller.get(`/api/documents/${documentId}/file`).buffer(true).expect(200);
    const text = execFileSync('pdftotext', ['-layout', '-', '-'], { input: file.body as Buffer, encoding: 'utf8', maxBuffer: 1 << 26 }).replaceAll(/\s+/g, ' ');
    expect(text.match(/No longer replicable: the rows of sample 1/g)).toHaveLength(2);
    expect(said.test(text.slice(text.indexOf('No longer replicable')))).toBe(true);
  });

  it('lets a file that was on its way arrive', async () => {
    await modeller.sendUpload(upload, 10, Buffer.from('2,1\n3,0\n4,')).expect(204);
    const { body } = await modeller.get(`/api/models/${world['modelId']}/samples`).expect(200);
    expect(body.samples).toMatchObject([{ number: 2, fileName: 'on-its-way.csv', erased: null }, { number: 1, erased: { by: 'admin' } }]);
  });

  it('ends the reading of another file, of which nothing is left', async () => {
    const modelId = await modeller.model('Read meanwhile');
    const { id } = await modeller.upload(modelId, Buffer.from(applicantsWithRisk(200)));
    const path = `/api/models/${modelId}/samples/${id}`;
    const { choices } = (await modeller.post(`${path}/preview`).send({}).expect(200)).body as { choices: object };
    const runId = await heldRuns.while(
      async () => (await modeller.post(`${path}/readings`).send(choices).expect(202)).body.id as string,
      () => erase(path).expect(204),
    );
    await endsOnce(runId);
    expect(await counted(`SELECT count(*) FROM sample_readings WHERE sample_id = '${id}'`)).toBe(0);
    expect((await modeller.get(path).expect(200)).body).toMatchObject({ state: 'received', rows: null, abilities: [], erased: { by: 'admin' } });
    await expect(
      server.context.pool.query(`INSERT INTO sample_readings (id, sample_id, run_id, attempt) VALUES (gen_random_uuid(), '${id}', '${runId}', 2)`),
    ).rejects.toThrow(/were erased/);
  });
}
