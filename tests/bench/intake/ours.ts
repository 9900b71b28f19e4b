import { Client } from 'pg';
import supertest from 'supertest';
import type { Run } from '@tallystone/contracts/runs/schema';
import type { PostgresAddresses } from '../../../tools/postgres.mjs';
import { Visitor } from '../../support/intake';
import { peakMemoryMiB } from '../../support/server-process';
import { cpuSeconds, endService, prepareProduct, startService, uploadFile } from '../product';

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
  const { environment, people } = await prepareProduct(addresses, data, { marian: ['modeller'] });
  const web = await startService('web', environment);
  const worker = await startService(
    'worker',
    environment,
    profileFolder === null ? [] : ['--cpu-prof', `--cpu-prof-dir=${profileFolder}`],
  );
  const database = new Client({ connectionString: addresses.ownerUrl });
  await database.connect();
  try {
    const modeller = new Visitor(supertest.agent(web.url), people.marian.id);
    await modeller.enter(people.marian.email);
    const modelId = await modeller.model();
    const { headers } = await modeller.beginUpload(modelId, bytes).expect(201);
    await uploadFile(new URL(headers.location, web.url).href, path, modeller);
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
    await Promise.all([endService(web.process), endService(worker.process)]);
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
