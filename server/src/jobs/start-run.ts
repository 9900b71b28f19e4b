import type { Transaction } from 'sequelize';
import type { z } from 'zod';
import type { Context } from '../context';
import { rows } from '../database/sql';
import { Run } from '../models/run';
import { type RowsPlace, holdRows } from '../storage/erasure';
import { type JobDefinition, usualAttempts } from './definitions/job';
import { within } from './queue';
import { emitRunEvent } from './run-events';

export interface NewRun<Payload extends z.ZodType> {
  readonly payload: z.input<Payload>;
  /** Who started it: progress goes to them. */
  readonly person: { readonly id: string };
  readonly modelId?: string;
  /** What the run is about, for lists and for abilities: `sample` and its id. */
  readonly entity?: string;
  readonly entityId?: string;
  /** While a run of this kind with this key has not ended, starting another gives that one back. */
  readonly singleton?: string;
  /** The sample whose rows it reads: held against erasure until the run is there, and the run ends when they are erased later. */
  readonly rowsOf?: RowsPlace;
  readonly requestId?: string;
}

/**
 * Starts work: a run and its job, both within the caller's transaction, so that neither is there without the other and nothing starts
 * before the commit.
 *
 * @throws Problem 409 where the rows it would read were erased
 * @returns the new run, or the one already under way for the same `singleton`
 * @example
 * const run = await startRun(context, tx, verifyRecordJob, { payload: {}, person, singleton: 'whole' });
 */
export async function startRun<Payload extends z.ZodType>(
  context: Pick<Context, 'sequelize' | 'boss'>,
  tx: Transaction,
  definition: JobDefinition<string, Payload>,
  asked: NewRun<Payload>,
): Promise<Run> {
  const payload = definition.payload.parse(asked.payload);
  if ((definition.readsRows ?? false) !== (asked.rowsOf !== undefined)) throw new Error(`${definition.kind} is to be started with the sample it reads`);
  const sampleId = asked.rowsOf === undefined ? null : await holdRows(context.sequelize, tx, asked.rowsOf);
  const [made] = await rows<{ id: string }>(
    context.sequelize,
    `INSERT INTO runs (kind, queue, payload, most_attempts, person_id, model_id, entity, entity_id, singleton, request_id, sample_id)
     VALUES ($1, $2, $3::jsonb, $4, $5, $6, $7, $8, $9, $10, $11)
     ON CONFLICT (kind, singleton) WHERE state IN ('queued', 'running', 'cancelling') DO NOTHING RETURNING id`,
    [
      definition.kind, definition.queue, JSON.stringify(payload), definition.mostAttempts ?? usualAttempts, asked.person.id, asked.modelId ?? null,
      asked.entity ?? null, asked.entityId ?? null, asked.singleton ?? null, asked.requestId ?? null, sampleId,
    ], // prettier-ignore
    tx,
  );
  if (!made) {
    const underWay = await Run.findOne({
      where: { kind: definition.kind, singleton: asked.singleton ?? null, endedAt: null },
      transaction: tx,
    });
    if (underWay) return underWay;
    // It ended between the two statements.
    return startRun(context, tx, definition, asked);
  }
  await enqueue(context, tx, made.id, definition.queue);
  await emitRunEvent(context.sequelize, tx, made.id);
  return (await Run.findByPk(made.id, { transaction: tx }))!;
}

/** Puts a run into its queue (again), under a new job: an older job that comes late finds that it is no longer the run's and does nothing. */
export async function enqueue(
  { sequelize, boss }: Pick<Context, 'sequelize' | 'boss'>,
  tx: Transaction,
  runId: string,
  queue: string,
): Promise<void> {
  const db = within(sequelize, tx);
  const [old] = await rows<{ job_id: string | null }>(sequelize, 'SELECT job_id FROM runs WHERE id = $1', [runId], tx);
  if (old?.job_id) await boss.deleteJob(queue, old.job_id, { db });
  const jobId = await boss.send(queue, { runId }, { db });
  await rows(
    sequelize,
    `UPDATE runs SET state = 'queued', job_id = $2, queued_at = clock_timestamp(), phase = NULL, share = NULL WHERE id = $1 RETURNING id`,
    [runId, jobId],
    tx,
  );
  await rows(sequelize, `SELECT pg_notify('tallystone_queue', $1)`, [queue], tx);
}
