import { type ChildProcess, spawn } from 'node:child_process';
import { createHash, randomBytes } from 'node:crypto';
import { request as send } from 'node:http';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { IntakeServer, type Visitor } from '../support/intake';

/**
 * A real server process, killed in the middle of an upload and started anew on the same database: what was acknowledged is there, at most
 * one chunk is sent again, and nothing half-made is ever listed.
 */

const chunk = 8 * 1024 * 1024;
let support: IntakeServer;
let modeller: Visitor;
let modelId: string;
let serving: { process: ChildProcess; url: string } | null = null;

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

function start(): Promise<{ process: ChildProcess; url: string }> {
  const main = fileURLToPath(new URL('../../server/src/main.ts', import.meta.url));
  return new Promise((resolve, reject) => {
    const child = spawn(process.execPath, ['--import', 'tsx', main, '--services=web'], {
      env: { ...process.env, ...IntakeServer.environment(support.database, support.folder), LOG_LEVEL: 'error' },
      stdio: ['ignore', 'ignore', 'inherit', 'ipc'],
    });
    child.once('message', (said: { type: string; url?: string; message?: string }) =>
      said.type === 'ready' && said.url
        ? resolve({ process: child, url: said.url.replace('localhost', '127.0.0.1') })
        : reject(new Error(said.message)),
    );
    child.once('exit', (code) => reject(new Error(`The server ended with ${code}`)));
  });
}

function kill(child: ChildProcess): Promise<void> {
  return new Promise((resolve) => {
    child.once('exit', () => resolve());
    process.kill(child.pid as number, 'SIGKILL');
  });
}

/** Sends bytes from an offset; resolves with the status, or null when the connection broke. `stopAfter` holds the rest back. */
function patch(
  url: string,
  offset: number,
  bytes: Buffer,
  cookie: string,
  token: string,
  stopAfter?: { bytes: number; reached: () => void },
): Promise<number | null> {
  return new Promise((resolve) => {
    const request = send(
      url,
      {
        method: 'PATCH',
        headers: {
          Cookie: cookie,
          'X-XSRF-TOKEN': token,
          'Tus-Resumable': '1.0.0',
          'Upload-Offset': String(offset),
          'Content-Type': 'application/offset+octet-stream',
          'Content-Length': bytes.length,
        },
      },
      (response) => {
        response.resume();
        response.once('end', () => resolve(response.statusCode ?? null));
      },
    );
    request.on('error', () => resolve(null));
    if (stopAfter) request.write(bytes.subarray(0, stopAfter.bytes), () => stopAfter.reached());
    else request.end(bytes);
  });
}

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
    const { cookie, token } = modeller.credentials();

    serving = await start();
    const begun = await modeller.beginUpload(modelId, bytes.length).expect(201);
    const path = begun.headers.location;
    // Two chunks and a half have left for the server when it dies.
    const sent = 2 * chunk + chunk / 2;
    let reached!: () => void;
    const written = new Promise<void>((resolve) => (reached = resolve));
    const broken = patch(new URL(path, serving.url).href, 0, bytes, cookie, token, { bytes: sent, reached });
    await written;
    const offsetNow = async (): Promise<number> => Number((await modeller.askUpload(path).expect(200)).headers['upload-offset']);
    const until = Date.now() + 30_000;
    while ((await offsetNow()) < 2 * chunk && Date.now() < until) await new Promise((resolve) => setTimeout(resolve, 50));
    await kill(serving.process);
    expect(await broken).toBeNull();

    const offset = await offsetNow();
    expect(offset).toBeLessThanOrEqual(sent);
    expect(offset).toBeGreaterThanOrEqual(sent - chunk);
    const between = await modeller.get(`/api/models/${modelId}/samples`).expect(200);
    expect(between.body.samples).toEqual([]);
    expect(between.body.uploads).toMatchObject([{ offset, size: bytes.length }]);

    serving = await start();
    expect(await patch(new URL(path, serving.url).href, offset, bytes.subarray(offset), cookie, token)).toBe(204);
    const after = await modeller.get(`/api/models/${modelId}/samples`).expect(200);
    expect(after.body.uploads).toEqual([]);
    expect(after.body.samples).toMatchObject([{ sha256, size: bytes.length, state: 'received' }]);
    await kill(serving.process);
    serving = null;
  }, 180_000);
});
