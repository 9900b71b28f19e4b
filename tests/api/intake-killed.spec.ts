import { createHash, randomBytes } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { IntakeServer, type Visitor } from '../support/intake';
import { type ServerProcess, killProcess, patchUpload, startServerProcess } from '../support/server-process';

/**
 * A real server process, killed in the middle of an upload and started anew on the same database: what was acknowledged is there, at most
 * one chunk is sent again, and nothing half-made is ever listed.
 */

const chunk = 8 * 1024 * 1024;
let support: IntakeServer;
let modeller: Visitor;
let modelId: string;
let serving: ServerProcess | null = null;

beforeAll(async () => {
  // People, sessions and the checks between come from here; files are sent to the process alone.
  support = await IntakeServer.start({ worker: false });
  modeller = await support.signIn('marian', 'modeller');
  modelId = await modeller.model();
}, 120_000);
afterAll(async () => {
  serving?.process.kill('SIGKILL');
  await support.stop();
});

describe('a server killed in the middle of an upload', () => {
  it('goes on from the offset of the last chunk, and the file arrives whole', async () => {
    const bytes = Buffer.concat([
      Buffer.from('id,bad\n'),
      Buffer.from(
        randomBytes(20 * 1024 * 1024)
          .toString('base64')
          .replace(/(.{40})/g, '$1,1\n'),
      ),
    ]);
    const sha256 = createHash('sha256').update(bytes).digest('hex');
    const credentials = modeller.credentials();

    serving = await startServerProcess(support, 'web');
    const begun = await modeller.beginUpload(modelId, bytes.length).expect(201);
    const path = begun.headers.location;
    // Two chunks and a half have left for the server when it dies.
    const sent = 2 * chunk + chunk / 2;
    let reached!: () => void;
    const written = new Promise<void>((resolve) => (reached = resolve));
    const broken = patchUpload(new URL(path, serving.url).href, 0, bytes, credentials, { bytes: sent, reached });
    await written;
    const offsetNow = async (): Promise<number> => Number((await modeller.askUpload(path).expect(200)).headers['upload-offset']);
    const until = Date.now() + 30_000;
    while ((await offsetNow()) < 2 * chunk && Date.now() < until) await new Promise((resolve) => setTimeout(resolve, 50));
    await killProcess(serving.process);
    expect(await broken).toBeNull();

    const offset = await offsetNow();
    expect(offset).toBeLessThanOrEqual(sent);
    expect(offset).toBeGreaterThanOrEqual(sent - chunk);
    const between = await modeller.get(`/api/models/${modelId}/samples`).expect(200);
    expect(between.body.samples).toEqual([]);
    expect(between.body.uploads).toMatchObject([{ offset, size: bytes.length }]);

    serving = await startServerProcess(support, 'web');
    expect(await patchUpload(new URL(path, serving.url).href, offset, bytes.subarray(offset), credentials)).toBe(204);
    const after = await modeller.get(`/api/models/${modelId}/samples`).expect(200);
    expect(after.body.uploads).toEqual([]);
    expect(after.body.samples).toMatchObject([{ sha256, size: bytes.length, state: 'received' }]);
    await killProcess(serving.process);
    serving = null;
  }, 180_000);
});
