import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { Transaction } from 'sequelize';
import type { Context } from '../context';
import { rows } from '../database/sql';
import { runsEnded } from '../logging/metrics';
import type { Handler, RunFacts } from './handler';
import { emitRunEvent } from './run-events';
import { enqueue } from './start-run';

/** The run was cancelled by a person. */
export class Cancelled extends Error {
  override readonly name = 'Cancelled';
}
/** Another attempt has begun or the run has ended: this one must leave no trace. */
export class Superseded extends Error {
  override readonly name = 'Superseded';
}
/** The worker stops: the run goes back to the queue. */
export class Stopping extends Error {
  override readonly name = 'Stopping';
}

/** A run as the worker holds it. */
export interface Held extends RunFacts {
  readonly queue: string;
  readonly payload: unknown;
  readonly mostAttempts: number;
  readonly state: string;
  readonly attempt: number;
}

const columns = `id, kind, queue, payload, state, attempt, most_attempts AS "mostAttempts", person_id AS "personId", model_id AS "modelId",
  entity, entity_id AS "entityId", request_id AS "requestId"`;

/** The key of the advisory lock that an attempt holds as long as its worker's connection lives. */
export const attemptKey = `hashtextextended('run-attempt:' || $1 || ':' || $2, 0)`;

/** Turns a queued run into a running one with a new attempt; null when this job is no longer the run's. */
export async function beginAttempt(
  { sequelize }: Context,
  tx: Transaction,
  runId: string,
  jobId: string,
  worker: string,
): Promise<Held | null> {
  const [run] = await rows<Held>(
    sequelize,
    `UPDATE runs SET state = 'running', attempt = attempt + 1, started_at = coalesce(started_at, clock_timestamp()), phase = NULL, share = NULL
     WHERE id = $1 AND job_id = $2 AND state = 'queued' RETURNING ${columns}`,
    [runId, jobId],
    tx,
  );
  if (!run) return null;
  await rows(
    sequelize,
    'INSERT INTO run_attempts (run_id, number, worker) VALUES ($1, $2, $3) RETURNING number',
    [runId, run.attempt, worker],
    tx,
  );
  await emitRunEvent(sequelize, tx, runId);
  return run;
}

/**
 * Locks the run for a write of one attempt.
 *
 * @throws Superseded or Cancelled when the attempt no longer counts
 */
export async function holdFence({ sequelize }: Context, tx: Transaction, run: Held): Promise<void> {
  const [now] = await rows<{ state: string; attempt: number }>(
    sequelize,
    'SELECT state, attempt FROM runs WHERE id = $1 FOR UPDATE',
    [run.id],
    tx,
  );
  if (now?.attempt === run.attempt && now.state === 'cancelling') throw new Cancelled('The run was cancelled');
  if (now?.attempt !== run.attempt || now.state !== 'running') throw new Superseded('Another attempt does this work');
}

export interface Ending {
  readonly state: 'succeeded' | 'failed' | 'cancelled';
  readonly outcome: 'succeeded' | 'failed' | 'cancelled' | 'lost';
  readonly result?: unknown;
  readonly problem?: ProblemItem;
}

/** Ends a run and its attempt. The caller holds the run's row. */
export async function endRun(
  context: Pick<Context, 'sequelize'>,
  tx: Transaction,
  run: Held,
  handler: Handler | undefined,
  ending: Ending,
): Promise<void> {
  const { sequelize } = context;
  if (ending.state !== 'succeeded') await handler?.abandon?.(tx, { ...run, outcome: ending.state });
  await rows(
    sequelize,
    `UPDATE runs SET state = $2, result = $3::jsonb, problem = $4::jsonb, share = CASE WHEN $2 = 'succeeded' THEN 1 ELSE share END,
       ended_at = clock_timestamp() WHERE id = $1 RETURNING id`,
    [run.id, ending.state, asColumn(ending.result), asColumn(ending.problem)],
    tx,
  );
  await rows(sequelize, 'DELETE FROM run_parts WHERE run_id = $1 RETURNING number', [run.id], tx);
  await closeAttempt(context, tx, run, ending.outcome);
  await emitRunEvent(sequelize, tx, run.id);
  runsEnded.inc({ kind: run.kind, state: ending.state });
}

/** Gives a run back to the queue for another attempt. The caller holds the run's row. */
export async function requeue(context: Context, tx: Transaction, run: Held, outcome: 'lost' | 'released'): Promise<void> {
  await closeAttempt(context, tx, run, outcome);
  await enqueue(context, tx, run.id, run.queue);
  await emitRunEvent(context.sequelize, tx, run.id);
}

async function closeAttempt({ sequelize }: Pick<Context, 'sequelize'>, tx: Transaction, run: Held, outcome: string): Promise<void> {
  await rows(
    sequelize,
    'UPDATE run_attempts SET ended_at = clock_timestamp(), outcome = $3 WHERE run_id = $1 AND number = $2 AND ended_at IS NULL RETURNING number',
    [run.id, run.attempt, outcome],
    tx,
  );
}

/** Locks every run that has not ended and reads the rows of this sample. */
export function takeRunsOnRows({ sequelize }: Pick<Context, 'sequelize'>, tx: Transaction, sampleId: string): Promise<Held[]> {
  return rows<Held>(
    sequelize,
    `SELECT ${columns} FROM runs WHERE sample_id = $1 AND state IN ('queued', 'running', 'cancelling') ORDER BY id FOR UPDATE`,
    [sampleId],
    tx,
  );
}

/** Locks one run if nobody else holds it. */
export async function takeRun({ sequelize }: Context, tx: Transaction, runId: string): Promise<Held | null> {
  const [run] = await rows<Held>(sequelize, `SELECT ${columns} FROM runs WHERE id = $1 FOR UPDATE SKIP LOCKED`, [runId], tx);
  return run ?? null;
}

const asColumn = (value: unknown): string | null => (value === undefined || value === null ? null : JSON.stringify(value));
