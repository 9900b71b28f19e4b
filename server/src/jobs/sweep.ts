import type { Context } from '../context';
import { rows } from '../database/sql';
import { inTransaction } from '../database/transaction';
import type { Handler } from './handler';
import { endRun, requeue, takeRun } from './run-state';

/** Seconds without a heartbeat after which an attempt is lost: sooner when its advisory lock is free, since then its process is gone. */
const silentWhenGone = 5;
const silentWhenStuck = 10;

/**
 * Looks after runs whose worker is gone or stuck, and after those that were cancelled with nobody at work. Every worker sweeps; row locks
 * that are skipped when held make it safe.
 */
export async function sweep(context: Context, handlers: ReadonlyMap<string, Handler>): Promise<void> {
  await sweepLostAttempts(context, handlers);
  await sweepCancelled(context, handlers);
  await sweepForgotten(context);
}

async function sweepLostAttempts(context: Context, handlers: ReadonlyMap<string, Handler>): Promise<void> {
  const { sequelize } = context;
  const silent = await rows<{ run_id: string; number: number }>(
    sequelize,
    `SELECT run_id, number FROM run_attempts WHERE ended_at IS NULL AND heartbeat_at < clock_timestamp() - make_interval(secs => ${silentWhenGone})`,
  );
  for (const { run_id: runId, number } of silent) {
    await inTransaction(sequelize, async (tx) => {
      const run = await takeRun(context, tx, runId);
      if (!run) return;
      const [lost] = await rows<{ lost: boolean }>(
        sequelize,
        `SELECT ended_at IS NULL AND (heartbeat_at < clock_timestamp() - make_interval(secs => ${silentWhenStuck})
           OR heartbeat_at < clock_timestamp() - make_interval(secs => ${silentWhenGone})
              AND pg_try_advisory_xact_lock(hashtextextended('run-attempt:' || run_id || ':' || number, 0))) AS lost
         FROM run_attempts WHERE run_id = $1 AND number = $2`,
        [runId, number],
        tx,
      );
      if (!lost?.lost || run.attempt !== number) return;
      context.log.warn({ runId, attempt: number }, 'the worker of a run is gone');
      const handler = handlers.get(run.kind);
      if (run.state === 'cancelling') return endRun(context, tx, run, handler, { state: 'cancelled', outcome: 'lost' });
      if (run.state !== 'running') return;
      const [{ before }] = await rows<{ before: number }>(
        sequelize,
        `SELECT count(*)::int AS before FROM run_attempts WHERE run_id = $1 AND outcome = 'lost'`,
        [runId],
        tx,
      );
      if (before + 1 < run.mostAttempts) return requeue(context, tx, run, 'lost');
      return endRun(context, tx, run, handler, {
        state: 'failed',
        outcome: 'lost',
        problem: { code: 'worker-lost', message: `The worker was lost ${before + 1} times over this work.`, where: {} },
      });
    });
  }
}

async function sweepCancelled(context: Context, handlers: ReadonlyMap<string, Handler>): Promise<void> {
  const idle = await rows<{ id: string }>(
    context.sequelize,
    `SELECT r.id FROM runs r WHERE r.state = 'cancelling'
       AND NOT EXISTS (SELECT 1 FROM run_attempts a WHERE a.run_id = r.id AND a.number = r.attempt AND a.ended_at IS NULL)`,
  );
  for (const { id } of idle) {
    await inTransaction(context.sequelize, async (tx) => {
      const run = await takeRun(context, tx, id);
      if (run?.state === 'cancelling')
        await endRun(context, tx, run, handlers.get(run.kind), { state: 'cancelled', outcome: 'cancelled' });
    });
  }
}

/** Queued, but its job was taken by a worker that died before it began. */
async function sweepForgotten(context: Context): Promise<void> {
  const forgotten = await rows<{ id: string }>(
    context.sequelize,
    `SELECT r.id FROM runs r LEFT JOIN pgboss.job j ON j.name = r.queue AND j.id = r.job_id
     WHERE r.state = 'queued' AND r.queued_at < clock_timestamp() - interval '10 seconds' AND (j.id IS NULL OR j.state NOT IN ('created', 'retry'))`,
  );
  for (const { id } of forgotten) {
    await inTransaction(context.sequelize, async (tx) => {
      const run = await takeRun(context, tx, id);
      if (run?.state === 'queued') await requeue(context, tx, run, 'lost');
    });
  }
}

/** Removes what is only of use for a while. */
export async function tidy({ pool }: Context): Promise<void> {
  await pool.query(`DELETE FROM run_events WHERE at < now() - interval '3 days'`);
  await pool.query(`DELETE FROM idempotency_keys WHERE created_at < now() - interval '7 days'`);
  await pool.query(`DELETE FROM sign_in_failures WHERE at < now() - interval '1 day'`);
}
