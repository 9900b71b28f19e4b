import type { Transaction } from 'sequelize';
import type { Context } from '../context';
import { rows } from '../database/sql';
import { inTransaction } from '../database/transaction';
import { type WorkerService, startWorker } from '../jobs/worker';

let worker: Promise<WorkerService> | null = null;

/** Ends the worker that the first run of the demo started, if any did. */
export async function stopDemoWorker(): Promise<void> {
  const started = worker;
  worker = null;
  await (await started)?.stop();
}

/**
 * Starts a run as a person would and waits until it has ended. The demo is made before the worker is there, so the first run starts one in
 * this process; a demo that is whole already starts none.
 *
 * @throws when it fails, with what the run says
 * @example
 * await runToEnd<{ definitionId: string }>(context, (tx) => confirmDraft(context, tx, modeller, draft, draft.revision, 'demo'));
 */
export async function runToEnd<Result>(
  context: Context,
  start: (tx: Transaction) => Promise<{ readonly id: string }>,
): Promise<Result> {
  worker ??= startWorker(context);
  await worker;
  const { id } = await inTransaction(context.sequelize, start);
  for (;;) {
    const [run] = await rows<{ kind: string; state: string; result: Result; problem: { message: string } | null }>(
      context.sequelize,
      'SELECT kind, state, result, problem FROM runs WHERE id = $1',
      [id],
    );
    if (run.state === 'succeeded') return run.result;
    if (run.state === 'failed' || run.state === 'cancelled')
      throw new Error(`${run.kind} ${run.state}: ${run.problem?.message ?? 'no reason given'}`);
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
}
