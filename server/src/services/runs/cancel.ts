import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { emitRunEvent } from '../../jobs/run-events';
import type { Actor } from '../../models/person';
import { appendRecord } from '../record/append';
import type { RunRow } from './find';

/**
 * Asks a run to stop and returns at once; its worker, or any worker when none has it, ends it within seconds. A run that has ended, or
 * that is writing its result at this moment, stays as it is.
 */
export async function cancelRun({ sequelize }: Context, tx: Transaction, actor: Actor, run: RunRow): Promise<void> {
  const [asked] = await rows<{ id: string }>(
    sequelize,
    `UPDATE runs SET state = 'cancelling' WHERE id = (SELECT id FROM runs WHERE id = $1 AND state IN ('queued', 'running') FOR UPDATE SKIP LOCKED) RETURNING id`,
    [run.id],
    tx,
  );
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
