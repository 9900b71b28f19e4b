import { createHash } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Run } from '@tallystone/contracts/runs/schema';
import { IntakeServer, type Visitor } from '../support/intake';
import { type ServerProcess, killProcess, patchUpload, peakMemoryMiB, startServerProcess } from '../support/server-process';

/** A file of just under 1 GiB goes through a real web process, which is killed on the way, and a real worker; neither holds it in memory. */

const GIBIBYTE = 1024 ** 3;
const PIECE = 8 * 1024 * 1024;
/** So many that fewer than a million rows, the limit, fill the file. */
const COLUMNS = 190;

let support: IntakeServer;
let modeller: Visitor;
let modelId: string;
let web: ServerProcess;
let worker: ServerProcess;

beforeAll(async () => {
  support = await IntakeServer.start({ worker: false });
  modeller = await support.signIn('marian', 'modeller');
  modelId = await modeller.model();
  web = await startServerProcess(support, 'web');
  worker = await startServerProcess(support, 'worker');
}, 120_000);
afterAll(async () => {
  await killProcess(web.process);
  await killProcess(worker.process);
  await support.stop();
});

/** Pieces of a mixed file: numbers, categories, an identifier; the same on every machine. */
function* pieces(size: number): Generator<Buffer> {
  let state = 12345;
  const random = (): number => (state = (state * 48271) % 2147483647) / 2147483647;
  const kinds = ['owner', 'rent', 'parents', 'other', ''];
  let lines = [['id', ...Array.from({ length: COLUMNS - 2 }, (_, j) => `c${j}`), 'bad'].join(',')];
  let length = lines[0].length + 1;
  let sent = 0;
  for (let row = 0; ; row++) {
    const fields = [`SM-${row}`];
    for (let j = 0; j < COLUMNS - 2; j++)
      fields.push(j % 5 === 0 ? kinds[Math.floor(random() * 5)] : (random() * 10_000).toFixed(j % 3));
    fields.push(random() < 0.1 ? '1' : '0');
    const line = fields.join(',');
    if (sent + length + line.length + 1 > size) break;
    lines.push(line);
    length += line.length + 1;
    if (length >= PIECE) {
      yield Buffer.from(`${lines.join('\n')}\n`);
      sent += length;
      lines = [];
      length = 0;
    }
  }
  if (lines.length > 0) yield Buffer.from(`${lines.join('\n')}\n`);
}

/** Kills the server when half of a piece has been sent, sees that no half sample is listed, starts it anew, and asks where to go on. */
async function killedWhileSending(location: string, offset: number, piece: Buffer): Promise<number> {
  let reached!: () => void;
  const written = new Promise<void>((resolve) => (reached = resolve));
  const broken = patchUpload(new URL(location, web.url).href, offset, piece, modeller.credentials(), {
    bytes: Math.floor(piece.length / 2),
    reached,
  });
  await written;
  await killProcess(web.process);
  expect(await broken).toBeNull();
  const between = await modeller.get(`/api/models/${modelId}/samples`).expect(200);
  expect(between.body.samples).toEqual([]);
  web = await startServerProcess(support, 'web');
  return Number((await modeller.askUpload(location).expect(200)).headers['upload-offset']);
}

describe('a file of 1 GiB', () => {
  it(
    'is taken in, read and stored in bounded memory',
    async () => {
      let size = 0;
      const hash = createHash('sha256');
      for (const piece of pieces(GIBIBYTE)) {
        size += piece.length;
        hash.update(piece);
      }
      expect(size).toBeGreaterThan(0.999 * GIBIBYTE);
      const sha256 = hash.digest('hex');

      const { headers } = await modeller.beginUpload(modelId, size).expect(201);
      let offset = 0;
      let killed: number | null = null;
      for (const piece of pieces(GIBIBYTE)) {
        // Half-way the server is killed in the middle of a piece: at most one chunk is sent again.
        let rest = piece;
        if (killed === null && offset > GIBIBYTE / 2) {
          killed = await killedWhileSending(headers.location, offset, piece);
          expect(killed).toBeGreaterThanOrEqual(offset + piece.length / 2 - PIECE);
          expect(killed).toBeLessThanOrEqual(offset + piece.length);
          rest = piece.subarray(killed - offset);
        }
        expect(
          await patchUpload(
            new URL(headers.location, web.url).href,
            offset + piece.length - rest.length,
            rest,
            modeller.credentials(),
          ),
        ).toBe(204);
        offset += piece.length;
      }
      expect(killed).not.toBeNull();
      const list = await modeller.get(`/api/models/${modelId}/samples`).expect(200);
      const [sample] = list.body.samples as { id: string; sha256: string }[];
      expect(sample.sha256).toBe(sha256);

      const path = `/api/models/${modelId}/samples/${sample.id}`;
      const preview = await modeller.post(`${path}/preview`).send({}).expect(200);
      const started = await modeller
        .post(`${path}/readings`)
        .send((preview.body as { choices: object }).choices)
        .expect(202);
      const run = await modeller.ended((started.body as Run).id, 40 * 60_000);
      expect(run.problem).toBeNull();
      expect(run.state).toBe('succeeded');
      const columns = await modeller.get(`${path}/columns`).expect(200);
      expect(columns.body.columns).toHaveLength(COLUMNS);

      // Limits well below the file: bounded by pieces and segments, not by its size.
      const [webMemory, workerMemory] = [peakMemoryMiB(web.process), peakMemoryMiB(worker.process)];
      console.log(`1 GiB: web ${webMemory.toFixed(0)} MiB, worker ${workerMemory.toFixed(0)} MiB at most`);
      expect(webMemory).toBeLessThan(512);
      expect(workerMemory).toBeLessThan(800);
    },
    60 * 60_000,
  );

  it('and a byte more is refused before it is sent', async () => {
    const { status, body } = await modeller.beginUpload(modelId, GIBIBYTE + 1);
    expect([status, body.code]).toEqual([413, 'too-large']);
  });
});
