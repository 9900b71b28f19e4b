import { problemCodes } from '@tallystone/contracts/problems/codes';
import { DatabaseError, type Sequelize, type Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { emitRunEvent } from '../../jobs/run-events';
import type { Actor } from '../../models/person';
import { Problem } from '../../problems/problem';
import { appendRecord } from '../record/append';
import type { RunRow } from './find';

/** Milliseconds for which cancelling waits for whoever writes about the run at this moment. */
const patience = 800;

/**
 * Asks a run to stop and returns within a second; its worker, or any worker when none has it, ends it within seconds. A run that has ended
 * stays as it is.
 *
 * @throws Problem 503 when the run writes for longer than that, as it does with a large result: nothing was asked of it then
 */
export async function cancelRun({ sequelize }: Context, tx: Transaction, actor: Actor, run: RunRow): Promise<void> {
  const asked = await askToStop(sequelize, tx, run.id);
  if (!asked) return;
  await rows(sequelize, `SELECT pg_notify('tallystone_cancel', $1)`, [run.id], tx);
  await emitRunEvent(sequelize, tx, run.id);
  await appendRecord(tx, {
    actor,
    action: 'run.cancelled',
    entity: 'run',
    entityId: run.id,
    modelId: run.modelId,
    detail: { kind: run.kind },
  });
}

/** Its worker may hold the row for a moment, as it does to say how far it is: passing over it then would lose what was asked. */
async function askToStop(sequelize: Sequelize, tx: Transaction, runId: string): Promise<boolean> {
  const [{ before }] = await rows<{ before: string }>(sequelize, `SELECT current_setting('lock_timeout') AS before`, [], tx);
  const waitAtMost = (time: string) => rows(sequelize, `SELECT set_config('lock_timeout', $1, true)`, [time], tx);
  await waitAtMost(`${patience}ms`);
  const asked = await rows<{ id: string }>(
    sequelize,
    `UPDATE runs SET state = 'cancelling' WHERE id = $1 AND state IN ('queued', 'running') RETURNING id`,
    [runId],
    tx,
  ).catch((error: unknown) => {
    throw isLockTimeout(error) ? busyWriting() : error;
  });
  await waitAtMost(before);
  return asked.length > 0;
}

const isLockTimeout = (error: unknown): boolean =>
  error instanceof DatabaseError && (error.parent as Error & { code?: string }).code === '55P03';

const busyWriting = (): Problem =>
  new Problem(
    503,
    problemCodes.unavailable,
    'The run is writing what it has found and cannot stop at this moment. Cancel it again in a few seconds.',
    {
      headers: { 'Retry-After': '2' },
    },
  );
