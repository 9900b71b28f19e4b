import type { Stability, ValidationWork } from '@tallystone/contracts/validation/schema';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { applicantsWithRisk, classApplicants, defineApplicants } from '../support/binned';
import { IntakeServer, type Visitor } from '../support/intake';
import { choose, fitPath, freeze, key, scale } from '../support/line';
import { type ServerProcess, killProcess, startServerProcess } from '../support/server-process';

/** A stability study spread over worker processes: whoever does its parts, the study is the same, and a worker that is lost loses nothing. */

const resamples = 100;
let support: IntakeServer;
let modeller: Visitor;
let versionId: string;
const workers: ServerProcess[] = [];
let alone: Stability;

beforeAll(async () => {
  support = await IntakeServer.start({ worker: false });
  workers.push(await startServerProcess(support, 'worker'));
  modeller = await support.signIn('marian', 'modeller');
  const modelId = await modeller.model();
  const { definitionId } = await defineApplicants(modeller, modelId, applicantsWithRisk(3000));
  const binning = await classApplicants(modeller, modelId, definitionId);
  const fit = await fitPath(modeller, modelId, binning.id, {
    lambda: { count: 12, smallestRatio: 0.001, earlyStop: false },
    folds: { count: 3, seed: 1, classing: 'once' },
  });
  await choose(modeller, fit.id, { index: 8, rule: 'by hand', reason: 'as an example' });
  await scale(modeller, fit.id);
  versionId = (await freeze(modeller, modelId, fit.id)).id;
}, 240_000);
afterAll(async () => {
  for (const { process } of workers) if (process.exitCode === null && process.signalCode === null) await killProcess(process);
  await support.stop();
});

const start = async (): Promise<string> =>
  (
    (
      await modeller
        .post(`/api/versions/${versionId}/stability`)
        .set('Idempotency-Key', key())
        .send({ resamples, seed: 5 })
        .expect(202)
    ).body as { runId: string }
  ).runId;

async function studied(runId: string): Promise<Stability> {
  const run = await modeller.ended(runId, 180_000);
  expect(run.problem).toBeNull();
  expect(run.state).toBe('succeeded');
  const { body } = await modeller.get(`/api/versions/${versionId}/validation`).expect(200);
  return (body as ValidationWork).stability[0];
}

interface Part {
  readonly holder: string | null;
  readonly state: string;
}
const parts = async (runId: string): Promise<Part[]> =>
  (await support.context.pool.query<Part>('SELECT holder, state FROM run_parts WHERE run_id = $1', [runId])).rows;

/** What the study says, without where and when. */
const numbers = ({ rows, notConverged, lambda }: Stability) => ({ rows, notConverged, lambda });

describe('a stability study', () => {
  it('is done by one worker alone', async () => {
    const runId = await start();
    alone = await studied(runId);
    expect(alone).toMatchObject({ resamples, seed: 5, notConverged: 0 });
    expect(alone.rows.length).toBeGreaterThan(2);
    expect(alone.rows[0].lower!).toBeLessThan(alone.rows[0].upper!);
    // What is done is not kept twice.
    expect(await parts(runId)).toEqual([]);
  }, 240_000);

  it('is the same to the last bit over three workers, each of which takes a share', async () => {
    workers.push(await startServerProcess(support, 'worker'), await startServerProcess(support, 'worker'));
    const runId = await start();
    const holders = new Set<string>();
    for (let run = await modeller.get(`/api/runs/${runId}`); !run.body.endedAt; run = await modeller.get(`/api/runs/${runId}`)) {
      for (const { holder } of await parts(runId)) if (holder) holders.add(holder);
      await new Promise((resolve) => setTimeout(resolve, 20));
    }
    expect(numbers(await studied(runId))).toEqual(numbers(alone));
    expect(holders.size).toBe(3);
  }, 240_000);

  it('survives a worker that is killed over a part, and ends once', async () => {
    const runId = await start();
    // The worker whose run it is must live: one that only does parts is killed.
    const until = Date.now() + 60_000;
    let victim: ServerProcess | undefined;
    while (!victim && Date.now() < until) {
      const { rows } = await support.context.pool.query<{ worker: string }>('SELECT worker FROM run_attempts WHERE run_id = $1', [
        runId,
      ]);
      const [leader] = rows;
      const held = (await parts(runId)).filter(({ state, holder }) => state === 'open' && holder && holder !== leader?.worker);
      victim = workers.find(({ process }) => held.some(({ holder }) => holder?.endsWith(`:${process.pid}`)));
    }
    expect(victim).toBeDefined();
    await killProcess(victim!.process);
    expect(numbers(await studied(runId))).toEqual(numbers(alone));
    const { rows } = await support.context.pool.query<{ count: string }>(`SELECT count(*) FROM evidence WHERE run_id = $1`, [
      runId,
    ]);
    expect(rows[0].count).toBe('1');
  }, 240_000);
});
