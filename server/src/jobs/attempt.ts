import type { Context } from '../context';
import { inTransaction } from '../database/transaction';
import { problemFrom } from '../problems/from-error';
import { problemOfFailure } from './failure';
import type { Handler, RunContext } from './handler';
import { Heartbeat } from './heartbeat';
import { Progress } from './progress';
import { Cancelled, type Held, Stopping, Superseded, beginAttempt, endRun, holdFence, requeue } from './run-state';

/** One attempt under way in this process. */
export interface Attempt {
  readonly run: Held;
  abort(reason: Error): void;
  /** Looks at once whether it was cancelled. */
  look(): void;
}

/**
 * Does one job of the queue: begins an attempt, works, and ends the run in whatever way it ends. Never throws for what the run is about;
 * throws only when the database cannot be written, in which case the attempt goes stale and is given to another.
 */
export async function attemptRun(
  context: Context,
  handlers: ReadonlyMap<string, Handler>,
  job: { readonly id: string; readonly runId: string },
  worker: string,
  active: Map<string, Attempt>,
): Promise<void> {
  const run = await inTransaction(context.sequelize, (tx) => beginAttempt(context, tx, job.runId, job.id, worker));
  if (!run) return;
  const log = context.log.child({ runId: run.id, kind: run.kind, attempt: run.attempt, requestId: run.requestId });
  const handler = handlers.get(run.kind);
  const stop = new AbortController();
  const abort = (reason: Error): void => void (stop.signal.aborted || stop.abort(reason));
  const heartbeat = new Heartbeat(context.config.databaseUrl, run, log, abort);
  const progress = new Progress(context, run);
  active.set(run.id, { run, abort, look: () => heartbeat.hurry() });
  log.info('run begins');
  try {
    await heartbeat.start();
    if (!handler) throw new Error(`No handler for ${run.kind}`);
    let finished = false;
    const inside: RunContext<unknown> = {
      context,
      run,
      attempt: run.attempt,
      signal: stop.signal,
      log,
      progress: (phase, share) => progress.say(phase, share),
      write: (work) =>
        inTransaction(context.sequelize, async (tx) => {
          stop.signal.throwIfAborted();
          await holdFence(context, tx, run);
          return work(tx);
        }),
      finish: async (work) => {
        if (finished) throw new Error('A run is finished once');
        stop.signal.throwIfAborted();
        await progress.settle();
        await inTransaction(context.sequelize, async (tx) => {
          await holdFence(context, tx, run);
          const result = handler.definition.result.parse(await work(tx));
          await endRun(context, tx, run, handler, { state: 'succeeded', outcome: 'succeeded', result });
        });
        finished = true;
      },
    };
    await handler.work(run.payload, inside);
    if (!finished) throw new Error(`The handler of ${run.kind} returned without a result`);
    log.info('run succeeded');
  } catch (thrown) {
    await progress.settle();
    await settle(context, run, handler, stop.signal.aborted ? stop.signal.reason : thrown, log);
  } finally {
    active.delete(run.id);
    await heartbeat.stop();
  }
}

async function settle(
  context: Context,
  run: Held,
  handler: Handler | undefined,
  cause: unknown,
  log: Context['log'],
): Promise<void> {
  if (cause instanceof Superseded) {
    log.warn('run was given to another attempt');
    return;
  }
  await inTransaction(context.sequelize, async (tx) => {
    const cancelled = await holdFence(context, tx, run).then(
      () => false,
      (refused: unknown) => {
        if (refused instanceof Cancelled) return true;
        throw refused;
      },
    );
    if (cancelled || cause instanceof Cancelled)
      await endRun(context, tx, run, handler, { state: 'cancelled', outcome: 'cancelled' });
    else if (cause instanceof Stopping || problemFrom(cause)?.status === 503) await requeue(context, tx, run, 'released');
    else await endRun(context, tx, run, handler, { state: 'failed', outcome: 'failed', problem: problemOfFailure(cause) });
  }).catch((refused: unknown) => {
    if (!(refused instanceof Superseded)) throw refused;
  });
  if (cause instanceof Cancelled || cause instanceof Stopping) log.info('run ended without a result');
  else if (problemFrom(cause)) log.info({ err: cause }, 'run failed');
  else log.error({ err: cause }, 'run failed on our side');
}
