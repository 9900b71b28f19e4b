import { type ChildProcess, spawn } from 'node:child_process';
import { closeSync, openSync, readFileSync, readSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { Client } from 'pg';
import supertest from 'supertest';
import type { Run } from '@tallystone/contracts/runs/schema';
import { readConfig } from '../../../server/src/config/environment';
import { openContext } from '../../../server/src/context';
import { inTransaction } from '../../../server/src/database/transaction';
import { createLog } from '../../../server/src/logging/log';
import { migrate } from '../../../server/src/migrations/migrate';
import { hashPassword } from '../../../server/src/services/passwords/prepare';
import { createPerson } from '../../../server/src/services/people/create';
import { stopThreads } from '../../../server/src/threads/run-in-thread';
import { ensureKeys } from '../../../tools/keys.mjs';
import type { PostgresAddresses } from '../../../tools/postgres.mjs';
import { Visitor, testPassword } from '../../support/intake';
import { patchUpload, peakMemoryMiB } from '../../support/server-process';

export interface OurTimes {
  /** From the start of reading to where every column is stored and the profile begins. */
  readonly seconds: number;
  /** From there to the end of the run. */
  readonly profileSeconds: number;
  readonly secondsInAll: number;
  /** Of the whole run, of the worker: its threads and what the kernel did for it; PostgreSQL's are not in it. */
  readonly cpuSeconds: number;
  readonly peakMemoryMB: number;
  /** The columns, without the raw file. */
  readonly storedBytes: number;
}

interface Given {
  readonly addresses: PostgresAddresses;
  readonly data: string;
  readonly path: string;
  readonly bytes: number;
  readonly sha256: string;
  readonly rows: number;
  readonly columns: number;
  /** Where the worker leaves a CPU profile of each of its threads, or null. */
  readonly profileFolder: string | null;
  readonly say: (line: string) => void;
}

const piece = 8 * 1024 * 1024;
const root = fileURLToPath(new URL('../../..', import.meta.url));

/** The built product in two processes, a web server and a worker: one file through both. */
export async function timeOurs({
  addresses,
  data,
  path,
  bytes,
  sha256,
  rows,
  columns,
  profileFolder,
  say,
}: Given): Promise<OurTimes> {
  const environment = {
    DATABASE_URL: addresses.appUrl,
    TALLYSTONE_DATA: data,
    TALLYSTONE_KEYS: ensureKeys(data),
    LOG_LEVEL: process.env.BENCH_LOG_LEVEL ?? 'error',
    PORT: '0',
  };
  await migrate(addresses.ownerUrl, addresses.appUrl);
  const email = 'marian@saltmarsh.example';
  const config = readConfig(environment);
  const context = await openContext(config, createLog(config.logLevel));
  const passwordHash = await hashPassword(context, testPassword);
  const person = await inTransaction(context.sequelize, (tx) =>
    createPerson(tx, { name: 'marian', email, passwordHash, roles: ['modeller'], by: 'set-up' }),
  );
  await context.close();
  await stopThreads();

  const web = await start('web', environment, []);
  const worker = await start(
    'worker',
    environment,
    profileFolder === null ? [] : ['--cpu-prof', `--cpu-prof-dir=${profileFolder}`],
  );
  const database = new Client({ connectionString: addresses.ownerUrl });
  await database.connect();
  try {
    const modeller = new Visitor(supertest.agent(web.url), person.id);
    await modeller.enter(email);
    const modelId = await modeller.model();
    const { headers } = await modeller.beginUpload(modelId, bytes).expect(201);
    await upload(new URL(headers.location, web.url).href, path, modeller);
    const { body } = await modeller.get(`/api/models/${modelId}/samples`).expect(200);
    const [sample] = body.samples as { id: string; sha256: string }[];
    if (sample.sha256 !== sha256) throw new Error('The file that arrived is not the one that was sent');
    say('uploaded');
    const sampleUrl = `/api/models/${modelId}/samples/${sample.id}`;
    const preview = await modeller.post(`${sampleUrl}/preview`).send({}).expect(200);
    const cpuBefore = cpuSeconds(worker.process);
    const started = await modeller
      .post(`${sampleUrl}/readings`)
      .send((preview.body as { choices: object }).choices)
      .expect(202);
    const { id } = started.body as Run;
    const profiling = await followRun(database, id);
    const run = await modeller.ended(id);
    if (run.state !== 'succeeded') throw new Error(`The file was not read: ${JSON.stringify(run.problem)}`);
    const listed = await modeller.get(`${sampleUrl}/columns`).expect(200);
    const found = listed.body as { rows: number; columns: unknown[] };
    if (found.rows !== rows || found.columns.length !== columns)
      throw new Error(`${found.rows} rows and ${found.columns.length} columns were read`);
    const [times] = (
      await database.query<{ seconds: number; before: number }>(
        `SELECT extract(epoch FROM ended_at - started_at)::float8 AS seconds, extract(epoch FROM $2::timestamptz - started_at)::float8 AS before
           FROM run_attempts WHERE run_id = $1`,
        [id, profiling],
      )
    ).rows;
    const [stored] = (await database.query<{ bytes: string }>('SELECT sum(length(content)) AS bytes FROM column_segments')).rows;
    return {
      seconds: times.before,
      profileSeconds: times.seconds - times.before,
      secondsInAll: times.seconds,
      cpuSeconds: cpuSeconds(worker.process) - cpuBefore,
      peakMemoryMB: (peakMemoryMiB(worker.process) * 1024 * 1024) / 1e6,
      storedBytes: Number(stored.bytes),
    };
  } finally {
    await database.end();
    await Promise.all([end(web.process), end(worker.process)]);
  }
}

/** When, by the database's clock, the profile began; resolves once the run has ended. */
async function followRun(database: Client, id: string): Promise<Date | null> {
  let profiling: Date | null = null;
  for (;;) {
    const [run] = (
      await database.query<{ state: string; phase: string | null; now: Date }>(
        'SELECT state, phase, clock_timestamp() AS now FROM runs WHERE id = $1',
        [id],
      )
    ).rows;
    if (run.phase === 'profiling') profiling ??= run.now;
    if (run.state !== 'queued' && run.state !== 'running') return profiling;
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
}

async function upload(url: string, path: string, visitor: Visitor): Promise<void> {
  const file = openSync(path, 'r');
  const buffer = Buffer.alloc(piece);
  for (let offset = 0; ;) {
    const count = readSync(file, buffer, 0, piece, offset);
    if (count === 0) break;
    const status = await patchUpload(url, offset, buffer.subarray(0, count), visitor.credentials());
    if (status !== 204) throw new Error(`The upload was answered with ${status}`);
    offset += count;
  }
  closeSync(file);
}

function start(
  service: 'web' | 'worker',
  environment: Record<string, string>,
  flags: readonly string[],
): Promise<{ process: ChildProcess; url: string }> {
  return new Promise((resolve, reject) => {
    const child = spawn(process.execPath, [...flags, join(root, 'dist/server/main.js'), `--services=${service}`], {
      cwd: root,
      env: { ...process.env, ...environment, NODE_ENV: 'production' },
      stdio: ['ignore', 'inherit', 'inherit', 'ipc'],
      // A session of its own, as a service has and PostgreSQL too: Linux shares a busy machine out by sessions.
      detached: true,
    });
    child.once('message', (said: { type: string; url?: string; message?: string }) =>
      said.type === 'ready'
        ? resolve({ process: child, url: (said.url ?? '').replace('localhost', '127.0.0.1').replace(/\/$/, '') })
        : reject(new Error(said.message)),
    );
    child.once('exit', (code) => reject(new Error(`The ${service} ended with ${code}`)));
  });
}

function end(child: ChildProcess): Promise<void> {
  return new Promise((resolve) => {
    child.once('exit', () => resolve());
    child.kill('SIGTERM');
  });
}

/** User and system time of a process so far (Linux's /proc, in hundredths of a second). */
function cpuSeconds({ pid }: ChildProcess): number {
  const fields = readFileSync(`/proc/${pid}/stat`, 'utf8').split(') ')[1].split(' ');
  return (Number(fields[11]) + Number(fields[12])) / 100;
}
