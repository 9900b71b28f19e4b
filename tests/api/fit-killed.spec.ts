import { type ChildProcess, spawn } from 'node:child_process';
import type { Fit, FitPath } from '@tallystone/contracts/fits/schema';
import type { Run } from '@tallystone/contracts/runs/schema';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { rows } from '../../server/src/database/sql';
import { startWorker, type WorkerService } from '../../server/src/jobs/worker';
import { builtPath } from '../support/built-server';
import { applicantsWithRisk, classApplicants, defineApplicants } from '../support/binned';
import { IntakeServer, type Visitor } from '../support/intake';
import { key } from '../support/line';

/** A real worker process, killed in the middle of a fit: another takes the run up, it ends once, and its numbers are those of an undisturbed fit. */

let server: IntakeServer;
let modeller: Visitor;
let modelId: string;
let binningId: string;
let worker: WorkerService | null = null;
const children: ChildProcess[] = [];

beforeAll(async () => {
  server = await IntakeServer.start({ worker: false });
  worker = await startWorker(server.context);
  modeller = await server.signIn('marian', 'modeller');
  modelId = await modeller.model();
  // Large enough that a fit takes seconds.
  const { definitionId } = await defineApplicants(modeller, modelId, applicantsWithRisk(8_000));
  binningId = (await classApplicants(modeller, modelId, definitionId)).id;
}, 240_000);
afterAll(async () => {
  for (const child of children) child.kill('SIGKILL');
  await worker?.stop();
  await server.stop();
});

async function start(name: string, folds = 20): Promise<Fit> {
  const { body } = await modeller
    .post(`/api/models/${modelId}/fits`)
    .set('Idempotency-Key', key())
    .send({
      binningId,
      settings: {
        name,
        lambda: { count: 100, smallestRatio: 1e-6, earlyStop: false },
        folds: { count: folds, seed: 3, classing: 'cuts' },
      },
    })
    .expect(201);
  return body as Fit;
}

/** A worker in a process of its own, as an installation runs it. */
function workerProcess(): ChildProcess {
  const child = spawn(process.execPath, [builtPath('cli/work')], {
    env: { ...process.env, ...IntakeServer.environment(server.database, server.folder), LOG_LEVEL: 'error' },
    stdio: ['ignore', 'ignore', 'inherit'],
  });
  children.push(child);
  return child;
}

async function until(runId: string, holds: (run: Run) => boolean, patience = 120_000): Promise<Run> {
  const end = Date.now() + patience;
  for (;;) {
    const run = (await modeller.get(`/api/runs/${runId}`).expect(200)).body as Run;
    if (holds(run)) return run;
    if (Date.now() > end) throw new Error(`Run ${runId} is ${run.state} at ${run.share} (${run.phase})`);
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
}

describe('a worker killed in the middle of a fit', () => {
  it('leaves no path behind; another worker ends the run once, with the numbers of an undisturbed fit', async () => {
    const undisturbed = await start('Undisturbed');
    expect((await modeller.ended(undisturbed.runId!, 180_000)).state).toBe('succeeded');
    await worker!.stop();
    worker = null;

    const child = workerProcess();
    const fit = await start('Disturbed');
    await until(fit.runId!, ({ state, share }) => state === 'running' && (share ?? 0) > 0.15);
    process.kill(child.pid!, 'SIGKILL');
    await new Promise((resolve) => child.once('exit', resolve));
    // While nobody works on it the fit is not ready and has no path.
    expect(((await modeller.get(`/api/fits/${fit.id}`).expect(200)).body as Fit).state).not.toBe('ready');
    await modeller.get(`/api/fits/${fit.id}/path`).expect(404);

    worker = await startWorker(server.context);
    const run = await modeller.ended(fit.runId!, 180_000);
    expect(run).toMatchObject({ state: 'succeeded', attempt: 2 });
    const paths = await rows<{ attempt: number }>(server.context.sequelize, 'SELECT attempt FROM fit_paths WHERE fit_id = $1', [
      fit.id,
    ]);
    expect(paths).toEqual([{ attempt: 2 }]);
    const numbers = async (id: string): Promise<FitPath> =>
      (await modeller.get(`/api/fits/${id}/path`).expect(200)).body as FitPath;
    expect(await numbers(fit.id)).toEqual(await numbers(undisturbed.id));
  }, 480_000);

  it('stops a fit that is cancelled and keeps nothing of it', async () => {
    // Long enough that it cannot end between being seen to run and being cancelled.
    const fit = await start('Cancelled', 50);
    await until(fit.runId!, ({ state }) => state === 'running');
    const asked = Date.now();
    const { body } = await modeller.post(`/api/runs/${fit.runId}/cancel`).expect(200);
    expect((body as Run).state).toMatch(/^cancel(ling|led)$/);
    expect(Date.now() - asked).toBeLessThan(5000);
    expect((await modeller.ended(fit.runId!)).state).toBe('cancelled');
    expect(((await modeller.get(`/api/fits/${fit.id}`).expect(200)).body as Fit).state).toBe('cancelled');
    await modeller.get(`/api/fits/${fit.id}/path`).expect(404);
  }, 240_000);
});
