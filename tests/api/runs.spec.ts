import { type ChildProcess, fork } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import type { Run } from '@tallystone/contracts/runs/schema';
import { Pool } from 'pg';
import type supertest from 'supertest';
import { afterAll, afterEach, beforeAll, describe, expect, it, vi } from 'vitest';
import { inTransaction } from '../../server/src/database/transaction';
import { Progress } from '../../server/src/jobs/progress';
import { startRun } from '../../server/src/jobs/start-run';
import { startWorker, type WorkerService } from '../../server/src/jobs/worker';
import { counting, countingJob, countingTables } from '../support/counting-job';
import { IntakeServer, type Visitor } from '../support/intake';

let server: IntakeServer;
let marian: Visitor;
let otto: Visitor;
let owner: Pool;
const children: ChildProcess[] = [];
let here: WorkerService | null = null;

// Workers are killed, frozen and given up on: seconds of waiting that a loaded machine stretches.
vi.setConfig({ testTimeout: 90_000 });

beforeAll(async () => {
  server = await IntakeServer.start({ worker: false });
  owner = new Pool({ connectionString: server.database.ownerUrl });
  await owner.query(countingTables);
  marian = await server.signIn('marian', 'modeller');
  otto = await server.signIn('otto', 'auditor');
});
afterEach(async () => {
  await here?.stop();
  here = null;
  for (const child of children.splice(0)) child.kill('SIGKILL');
});
afterAll(async () => {
  await owner.end();
  await server.stop();
});

/** A worker in a process of its own. */
async function workerProcess(): Promise<ChildProcess> {
  const child = fork(fileURLToPath(new URL('../support/worker-process.ts', import.meta.url)), {
    execArgv: ['--import', 'tsx'],
    env: { ...process.env, ...IntakeServer.environment(server.database, server.folder) },
    stdio: ['ignore', 'inherit', 'inherit', 'ipc'],
  });
  children.push(child);
  await new Promise<void>((resolve, reject) => {
    child.once('message', () => resolve());
    child.once('exit', (code) => reject(new Error(`The worker process ended with code ${code}`)));
  });
  return child;
}

const workHere = async (): Promise<void> => void (here = await startWorker(server.context, [counting]));

const begin = (payload: { steps: number; pause: number; fail?: boolean }, singleton?: string): Promise<string> =>
  inTransaction(
    server.context.sequelize,
    async (tx) => (await startRun(server.context, tx, countingJob, { payload, person: { id: marian.personId }, singleton })).id,
  );

const read = async (id: string): Promise<Run> => (await marian.get(`/api/runs/${id}`).expect(200)).body as Run;

async function until(id: string, reached: (run: Run) => boolean, patience = 40_000): Promise<Run> {
  const end = Date.now() + patience;
  for (;;) {
    const run = await read(id);
    if (reached(run)) return run;
    if (Date.now() > end) throw new Error(`The run is ${JSON.stringify(run)}`);
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
}

async function counted(id: string): Promise<string[]> {
  const { rows } = await owner.query<{ what: string }>(
    `SELECT attempt || ' ' || what AS what FROM counted WHERE run_id = $1 ORDER BY attempt, what`,
    [id],
  );
  return rows.map((row) => row.what);
}

const attempts = async (id: string): Promise<(string | null)[]> =>
  (
    await owner.query<{ outcome: string | null }>('SELECT outcome FROM run_attempts WHERE run_id = $1 ORDER BY number', [id])
  ).rows.map(({ outcome }) => outcome);

describe('a run', () => {
  it('is done once, with its result, and tells how far it is', async () => {
    await workHere();
    const id = await begin({ steps: 8, pause: 150 });
    const under = await until(id, (run) => run.state === 'running' && run.share !== null && run.share > 0);
    expect(under).toMatchObject({ phase: 'Counting', attempt: 1, abilities: ['cancel'] });
    const run = await until(id, ({ state }) => state === 'succeeded');
    expect(run).toMatchObject({ share: 1, result: { counted: 8 }, problem: null, abilities: [] });
    expect(await counted(id)).toEqual(['1 begun', '1 done']);
  });

  it('that throws fails with a problem, leaves nothing and is not tried again', async () => {
    await workHere();
    const id = await begin({ steps: 1, pause: 1, fail: true });
    const run = await until(id, ({ state }) => state === 'failed');
    expect(run).toMatchObject({ problem: { code: 'internal' }, result: null });
    expect(await counted(id)).toEqual(['0 abandoned failed']);
    expect(await attempts(id)).toEqual(['failed']);
  });

  it('is not started a second time while one with the same key is under way', async () => {
    const ids = await Promise.all(Array.from({ length: 8 }, () => begin({ steps: 1, pause: 1 }, 'the one')));
    expect(new Set(ids).size).toBe(1);
    await workHere();
    await until(ids[0], ({ state }) => state === 'succeeded');
    expect(await begin({ steps: 1, pause: 1 }, 'the one')).not.toBe(ids[0]);
  });

  it('is acknowledged as cancelled within a second and stopped within five', async () => {
    await workHere();
    const id = await begin({ steps: 400, pause: 100 });
    await until(id, ({ state }) => state === 'running');
    const asked = Date.now();
    const answer = await marian.post(`/api/runs/${id}/cancel`).send({}).expect(200);
    expect(answer.body.state).toBe('cancelling');
    expect(Date.now() - asked).toBeLessThan(1000);
    await until(id, ({ state }) => state === 'cancelled', 5000);
    expect(await counted(id)).toEqual(['0 abandoned cancelled']);
  });

  it('that is being written about is cancelled all the same: the request waits, and is told when it waited in vain', async () => {
    const id = await begin({ steps: 1, pause: 1 });
    const writer = await owner.connect();
    const hold = () => writer.query('BEGIN').then(() => writer.query('SELECT 1 FROM runs WHERE id = $1 FOR UPDATE', [id]));
    try {
      await hold();
      const asked = Date.now();
      const refused = await marian.post(`/api/runs/${id}/cancel`).send({}).expect(503);
      expect(Date.now() - asked).toBeLessThan(5000);
      expect(refused.body.detail).toContain('Cancel it again in a few seconds.');
      expect((await read(id)).state).toBe('queued');
      await writer.query('COMMIT');

      await hold();
      const [answer] = await Promise.all([
        marian.post(`/api/runs/${id}/cancel`).send({}).expect(200),
        new Promise((resolve) => setTimeout(resolve, 200)).then(() => writer.query('COMMIT')),
      ]);
      expect(answer.body.state).toBe('cancelling');
    } finally {
      writer.release();
    }
    await workHere();
    await until(id, ({ state }) => state === 'cancelled');
  });

  it('that waits in the queue is cancelled by any worker', async () => {
    const id = await begin({ steps: 400, pause: 100 });
    await marian.post(`/api/runs/${id}/cancel`).send({}).expect(200);
    await workHere();
    await until(id, ({ state }) => state === 'cancelled', 5000);
    expect(await attempts(id)).toEqual([]);
  });

  it('goes back to the queue when its worker stops, and is finished by another', async () => {
    await workHere();
    const id = await begin({ steps: 30, pause: 100 });
    await until(id, (run) => (run.share ?? 0) > 0.1);
    await here!.stop();
    expect((await read(id)).state).toBe('queued');
    await workHere();
    await until(id, ({ state }) => state === 'succeeded');
    expect(await attempts(id)).toEqual(['released', 'succeeded']);
    expect((await counted(id)).filter((what) => what.endsWith('done'))).toEqual(['2 done']);
  });
});

describe('a worker', () => {
  it('killed in the middle is noticed within 15 seconds, and its run ends once', async () => {
    const child = await workerProcess();
    const id = await begin({ steps: 40, pause: 100 });
    await until(id, (run) => (run.share ?? 0) > 0.1);
    const killed = Date.now();
    process.kill(child.pid!, 'SIGKILL');
    await workHere();
    await until(id, (run) => run.attempt === 2, 15_000);
    expect(Date.now() - killed).toBeLessThan(15_000);
    await until(id, ({ state }) => state === 'succeeded');
    expect(await attempts(id)).toEqual(['lost', 'succeeded']);
    expect((await counted(id)).filter((what) => what.endsWith('done'))).toEqual(['2 done']);
  });

  it('frozen and woken late writes nothing', async () => {
    const child = await workerProcess();
    const id = await begin({ steps: 25, pause: 100 });
    await until(id, (run) => (run.share ?? 0) > 0.1);
    process.kill(child.pid!, 'SIGSTOP');
    await workHere();
    // Its connection, and with it its advisory lock, lives on: only the silence tells.
    await until(id, (run) => run.attempt === 2, 20_000);
    process.kill(child.pid!, 'SIGCONT');
    await until(id, ({ state }) => state === 'succeeded');
    await new Promise((resolve) => setTimeout(resolve, 3000));
    expect(await attempts(id)).toEqual(['lost', 'succeeded']);
    expect((await counted(id)).filter((what) => what.endsWith('done'))).toEqual(['2 done']);
  });
});

describe('events', () => {
  it('reach the person who started the run, and are replayed after the last that was seen', async () => {
    const before = (await owner.query<{ last: string }>('SELECT coalesce(max(id), 0) AS last FROM run_events')).rows[0].last;
    await workHere();
    const id = await begin({ steps: 3, pause: 300 });
    await until(id, ({ state }) => state === 'succeeded');
    const all = await stream(marian, before);
    const states = all.filter(({ data }) => data.runId === id).map(({ data }) => data.state);
    expect(states[0]).toBe('queued');
    expect(states.at(-1)).toBe('succeeded');
    expect(states).toContain('running');
    const ids = all.map((event) => event.id);
    expect(ids).toEqual([...ids].sort((a, b) => a - b));
    // Coming back with an id in the middle brings what follows it and nothing else.
    const middle = ids[1];
    expect((await stream(marian, String(middle))).map((event) => event.id)).toEqual(ids.filter((one) => one > middle));
    // Nobody else hears of it.
    expect(await stream(otto, before)).toEqual([]);
  });

  it('end with the session', async () => {
    const visitor = await server.signIn('streaming', 'modeller');
    const ended = stream(visitor, '0', 30_000);
    await new Promise((resolve) => setTimeout(resolve, 1500));
    const asked = Date.now();
    await visitor.delete('/api/session').expect(200);
    await ended;
    expect(Date.now() - asked).toBeLessThan(3000);
  });
});

/** What the event stream sends within a while, or until the server ends it. Over a connection of its own, as a browser holds it. */
async function stream(
  visitor: Visitor,
  lastEventId: string,
  patience = 1200,
): Promise<{ id: number; data: { runId: string; state: string } }[]> {
  const cookies = (visitor.agent as unknown as { jar: CookieJar }).jar.getCookies({
    path: '/',
    domain: '127.0.0.1',
    secure: false,
    script: false,
  });
  const stop = new AbortController();
  const timer = setTimeout(() => stop.abort(), patience);
  let text = '';
  try {
    const response = await fetch(`${server.url}/api/events`, {
      headers: { 'Last-Event-ID': lastEventId, Cookie: cookies.toValueString() },
      signal: stop.signal,
    });
    expect(response.status).toBe(200);
    for await (const chunk of response.body!.pipeThrough(new TextDecoderStream())) text += chunk;
  } catch (error) {
    if (!stop.signal.aborted) throw error;
  }
  clearTimeout(timer);
  return [...text.matchAll(/id: (\d+)\nevent: run\ndata: (.*)\n/g)].map(([, id, data]) => ({
    id: Number(id),
    data: JSON.parse(data),
  }));
}

/** As much of superagent's cookie jar as is used here. */
interface CookieJar {
  getCookies(access: { path: string; domain: string; secure: boolean; script: boolean }): { toValueString(): string };
}

describe('what is said of progress', () => {
  it.each(['while it is written', 'in the pause after it'])('does not keep a run from ending %s', async (when) => {
    const id = await begin({ steps: 1, pause: 0 });
    vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout'] });
    try {
      const progress = new Progress(server.context, { id, attempt: 1 });
      progress.say('counting', 0.5);
      if (when === 'in the pause after it') while (vi.getTimerCount() === 0) await new Promise((resolve) => setImmediate(resolve));
      // The clock stands: a pause would never end.
      await progress.settle();
    } finally {
      vi.useRealTimers();
    }
  });
});

describe('idempotency', () => {
  it('makes one run of fifty sends at once, and gives each the same answer', async () => {
    const send = (key: string) => otto.post('/api/record/verifications').set('Idempotency-Key', key).send({});
    const answers = await Promise.all(Array.from({ length: 50 }, () => send('fifty-at-once')));
    expect(new Set(answers.map(({ status }) => status))).toEqual(new Set([202]));
    expect(new Set(answers.map(({ body }) => body.id)).size).toBe(1);
    expect(answers.filter(({ headers }) => headers['idempotent-replayed'] === 'true')).toHaveLength(49);
    const { rows } = await owner.query(`SELECT count(*)::int AS runs FROM runs WHERE kind = 'record.verify' AND person_id = $1`, [
      otto.personId,
    ]);
    expect(rows[0].runs).toBe(1);
  });

  it('refuses a key that was used for another body, and a malformed one', async () => {
    const admin = await server.signIn('ada', 'admin');
    const invite = (email: string, key: string): supertest.Test =>
      admin
        .post('/api/invitations')
        .set('Idempotency-Key', key)
        .send({ name: 'New', email, roles: ['modeller'] });
    const first = await invite('new@saltmarsh.example', 'the-first-key').expect(201);
    const again = await invite('new@saltmarsh.example', 'the-first-key').expect(201);
    expect(again.body).toEqual(first.body);
    expect((await invite('else@saltmarsh.example', 'the-first-key').expect(422)).body.code).toBe('idempotency-key-reused');
    await invite('else@saltmarsh.example', 'short').expect(400);
    // The same key of another person is another key.
    const other = await server.signIn('adele', 'admin');
    await other
      .post('/api/invitations')
      .set('Idempotency-Key', 'the-first-key')
      .send({ name: 'Else', email: 'else@saltmarsh.example', roles: [] })
      .expect(201);
  });
});
