import { createHash } from 'node:crypto';
import supertest from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { buildApp } from '../../server/src/app';
import { rows } from '../../server/src/database/sql';
import { heldRuns } from '../support/held-runs';
import { IntakeServer, type Visitor } from '../support/intake';

let server: IntakeServer;
let modeller: Visitor;
let colleague: Visitor;
let validator: Visitor;
let modelId: string;

beforeAll(async () => {
  server = await IntakeServer.start({ handlers: heldRuns.handlers });
  modeller = await server.signIn('marian', 'modeller');
  colleague = await server.signIn('oswin', 'modeller');
  validator = await server.signIn('vera', 'validator');
  modelId = await modeller.model();
  await modeller.post(`/api/models/${modelId}/members`).send({ personId: colleague.personId }).expect(201);
});
afterAll(() => server.stop());

const sha256 = (bytes: Buffer): string => createHash('sha256').update(bytes).digest('hex');
/** Compresses badly, as amounts do, and spans several chunks. */
function large(megabytes: number): Buffer {
  const lines = ['id,amount,bad'];
  let seed = 1;
  for (let size = 0; size < megabytes * 1024 * 1024; size += 30) {
    seed = (seed * 48271) % 2147483647;
    lines.push(`${lines.length},${(seed / 1000).toFixed(3)},${seed % 10 === 0 ? 1 : 0}`);
  }
  return Buffer.from(lines.join('\n'));
}
const list = async (visitor: Visitor) => (await visitor.get(`/api/models/${modelId}/samples`).expect(200)).body;

describe('sending a file', () => {
  it('takes it up from the offset that the server names, in pieces of any size', async () => {
    const bytes = large(20);
    const begun = await modeller.beginUpload(modelId, bytes.length).expect(201);
    const url = begun.headers.location;
    const before = await list(modeller);
    expect(before.samples).toEqual([]);
    expect(before.uploads).toMatchObject([{ fileName: 'applicants.csv', size: bytes.length, offset: 0 }]);
    let offset = 0;
    for (const piece of [1, 100_000, 9 * 1024 * 1024, 3 * 1024 * 1024]) {
      await modeller.sendUpload(url, offset, bytes.subarray(offset, offset + piece)).expect(204);
      offset += piece;
      const asked = await modeller.askUpload(url).expect(200);
      expect(asked.headers['upload-offset']).toBe(String(offset));
      // Half a file is an upload and no sample.
      expect((await list(modeller)).samples).toEqual([]);
    }
    await modeller.sendUpload(url, 5, bytes.subarray(5, 10)).expect(409);
    await modeller.sendUpload(url, offset, bytes.subarray(offset)).expect(204);
    const after = await list(modeller);
    expect(after.uploads).toEqual([]);
    expect(after.samples).toMatchObject([
      { state: 'received', size: bytes.length, sha256: sha256(bytes), number: 1, rows: null },
    ]);
  });

  it('belongs to whoever began it', async () => {
    const begun = await modeller.beginUpload(modelId, 1000).expect(201);
    const url = begun.headers.location;
    expect((await list(colleague)).uploads).toEqual([]);
    await colleague.askUpload(url).expect(404);
    await colleague.sendUpload(url, 0, Buffer.alloc(10, 'a')).expect(404);
    await validator.askUpload(url).expect(403);
    await validator.beginUpload(modelId, 1000).expect(403);
    const otherModel = await modeller.model('Another');
    await modeller.askUpload(url.replace(modelId, otherModel)).expect(404);
    await modeller.delete(url).set('Tus-Resumable', '1.0.0').expect(204);
    await modeller.askUpload(url).expect(404);
    expect((await list(modeller)).uploads).toEqual([]);
  });

  it('tells the SHA-256 of what has arrived, so that another file of this size is told apart before going on', async () => {
    const bytes = large(14);
    const most = bytes.length - 100_000;
    const { headers } = await modeller.beginUpload(modelId, bytes.length).expect(201);
    const url = headers.location;
    const arrived = async () => (await modeller.arrivedOf(url).expect(200)).body;
    expect(await arrived()).toEqual({ offset: 0, sha256: sha256(Buffer.alloc(0)) });
    for (const [from, to] of [
      [0, 1000],
      [1000, most],
    ]) {
      await modeller.sendUpload(url, from, bytes.subarray(from, to)).expect(204);
      expect(await arrived()).toEqual({ offset: to, sha256: sha256(bytes.subarray(0, to)) });
    }
    // As after a restart of the process: what it remembers of uploads hangs on its context, so a new one has nothing but the stored chunks.
    const afresh = buildApp({ ...server.context });
    const told = await supertest(afresh).get(`${url}/arrived`).set('Cookie', modeller.credentials().cookie).expect(200);
    expect(told.body).toEqual(await arrived());
    await colleague.arrivedOf(url).expect(404);
    await validator.arrivedOf(url).expect(403);

    // The bytes sent do not make the file that the sender has: no sample, and what was sent before stays an upload.
    const end = bytes.subarray(most);
    const changed = Buffer.from(bytes);
    changed[17] ^= 1;
    const refused = await modeller.sendUpload(url, most, end).set('Upload-Sha256', sha256(changed)).expect(422);
    expect(refused.body).toMatchObject({ code: 'other-file', detail: expect.stringContaining('No sample was made of it.') });
    expect((await modeller.sendUpload(url, most, end).set('Upload-Sha256', 'abc').expect(422)).body.problems).toMatchObject([
      { code: 'not-a-fingerprint' },
    ]);
    const between = await list(modeller);
    expect(between.samples.map((sample: { sha256: string }) => sample.sha256)).not.toContain(sha256(bytes));
    expect(between.uploads).toMatchObject([{ offset: most }]);
    await modeller.sendUpload(url, most, end).set('Upload-Sha256', sha256(bytes).toUpperCase()).expect(204);
    const after = await list(modeller);
    expect(after.samples[0].sha256).toBe(sha256(bytes));
    expect(after.uploads).toEqual([]);
    await modeller.arrivedOf(url).expect(404);
  });

  it('is refused without the token of the page, like any change', async () => {
    await modeller.agent
      .post(`/api/models/${modelId}/uploads`)
      .set('Tus-Resumable', '1.0.0')
      .set('Upload-Length', '10')
      .expect(403);
    const begun = await modeller.beginUpload(modelId, 10).expect(201);
    await modeller.agent
      .patch(begun.headers.location)
      .set('Tus-Resumable', '1.0.0')
      .set('Upload-Offset', '0')
      .set('Content-Type', 'application/offset+octet-stream')
      .send(Buffer.alloc(10, 'x'))
      .expect(403);
    await modeller.delete(begun.headers.location).set('Tus-Resumable', '1.0.0').expect(204);
  });

  it('stores the same bytes once when two connections send them at once', async () => {
    const bytes = large(1);
    const { headers } = await modeller.beginUpload(modelId, bytes.length).expect(201);
    const answers = await Promise.all([0, 1, 2].map(() => modeller.sendUpload(headers.location, 0, bytes)));
    const statuses = answers.map(({ status }) => status).sort();
    expect(statuses[0]).toBe(204);
    expect(statuses.slice(1).every((status) => status === 409 || status === 204 || status === 400)).toBe(true);
    const { samples } = await list(modeller);
    expect(samples[0].sha256).toBe(sha256(bytes));
    expect(samples.filter((sample: { sha256: string }) => sample.sha256 === sha256(bytes))).toHaveLength(1);
  });

  it('has its limits, each with what was found', async () => {
    const over = await modeller.beginUpload(modelId, 2 * 1024 ** 3).expect(413);
    expect(over.body.detail).toBe(
      'The file has 2.00 GiB; at most 1 GiB can be brought in. Split it, or leave out columns that are not needed.',
    );
    const empty = await modeller.beginUpload(modelId, 0).expect(422);
    expect(empty.body.problems).toMatchObject([{ code: 'no-rows', message: 'No rows: the file is empty.' }]);
    const unnamed = await modeller.post(`/api/models/${modelId}/uploads`).set('Tus-Resumable', '1.0.0').expect(422);
    expect(unnamed.body.problems.map(({ code }: { code: string }) => code)).toEqual(['size-missing', 'name-missing']);
    const begun = await modeller.beginUpload(modelId, 10).expect(201);
    const more = await modeller.sendUpload(begun.headers.location, 0, Buffer.alloc(20, 'x'));
    expect([400, 413]).toContain(more.status);
    await modeller.delete(begun.headers.location).set('Tus-Resumable', '1.0.0').expect(204);
  });
});

describe('files that are not read here are refused before anything starts', () => {
  const send = async (bytes: Buffer, name = 'applicants.csv') => {
    const begun = await modeller.beginUpload(modelId, bytes.length, name);
    return begun.status === 201 ? modeller.sendUpload(begun.headers.location, 0, bytes) : begun;
  };
  const zip = (inside: string): Buffer =>
    Buffer.concat([Buffer.from([0x50, 0x4b, 3, 4]), Buffer.alloc(26), Buffer.from(inside), Buffer.alloc(5000)]);

  it.each([
    ['an Excel file by its content', () => send(zip('[Content_Types].xml')), 415, 'This is an Excel file; export it as CSV.'],
    [
      'an Excel file by its name',
      () => send(Buffer.from('a,b\n1,2\n'), 'applicants.xlsx'),
      415,
      'This is a spreadsheet file; export it as CSV.',
    ],
    [
      'an old Excel file',
      () => send(Buffer.concat([Buffer.from([0xd0, 0xcf, 0x11, 0xe0]), Buffer.alloc(5000)])),
      415,
      'This is an Excel file; export it as CSV.',
    ],
    [
      'a ZIP archive',
      () => send(zip('applicants.csv')),
      415,
      'This is a ZIP archive; unpack it and bring in the CSV file inside.',
    ],
    ['a PDF', () => send(Buffer.from(`%PDF-1.7\n${'x'.repeat(5000)}`)), 415, 'This is a PDF file; export the data as CSV.'],
    [
      'a header and nothing below',
      () => send(Buffer.from('age,income,bad\n\n')),
      422,
      'No rows: the file has a header and nothing below it.',
    ],
    ['blanks only', () => send(Buffer.from('\ufeff \r\n\r\n')), 422, 'No rows: the file is empty.'],
  ])('%s', async (_what, sent, status, detail) => {
    const samples = (await list(modeller)).samples.length;
    const answer = await sent();
    expect(answer.status).toBe(status);
    expect(answer.headers['content-type']).toContain('application/problem+json');
    expect(answer.body.detail).toBe(detail);
    const after = await list(modeller);
    expect(after.samples).toHaveLength(samples);
    expect(after.uploads).toEqual([]);
  });
});

describe('a reading that is cancelled', () => {
  it('is acknowledged at once, stops, and leaves nothing behind', async () => {
    const { id } = await modeller.upload(modelId, large(20), 'large.csv', 8 * 1024 * 1024);
    const path = `/api/models/${modelId}/samples/${id}`;
    const { body: preview } = await modeller.post(`${path}/preview`).send({}).expect(200);
    const started = async (): Promise<string> => {
      const { body: run } = await modeller.post(`${path}/readings`).send(preview.choices).expect(202);
      await modeller.post(`${path}/readings`).send(preview.choices).expect(409);
      return run.id;
    };
    const leftOf = () =>
      rows<{ readings: number; segments: number }>(
        server.context.sequelize,
        `SELECT (SELECT count(*)::int FROM sample_readings WHERE sample_id = $1) AS readings,
           (SELECT count(*)::int FROM column_segments s JOIN sample_readings r ON r.id = s.reading_id WHERE r.sample_id = $1) AS segments`,
        [id],
      );
    const runId = await heldRuns.while(
      started,
      async (held) => {
        expect((await modeller.get(path)).body.state).toBe('reading');
        const [stored] = await leftOf();
        expect(stored.readings).toBe(1);
        expect(stored.segments).toBeGreaterThan(0);
        await modeller.post(`/api/runs/${held}/cancel`).expect(200);
      },
      { segments: 2 },
    );
    const ended = await modeller.ended(runId);
    expect(ended.state).toBe('cancelled');
    const { body: sample } = await modeller.get(path).expect(200);
    expect(sample).toMatchObject({ state: 'received', rows: null, runId: null });
    expect(await leftOf()).toEqual([{ readings: 0, segments: 0 }]);
    // The file is still here, and can be read after all or discarded.
    await modeller.delete(path).expect(204);
    await modeller.get(path).expect(404);
    const [[chunks]] = await server.context.sequelize.query(
      `SELECT count(*)::int AS left FROM raw_files f WHERE f.file_name = 'large.csv'`,
    );
    expect(chunks).toEqual({ left: 0 });
  }, 120_000);
});
