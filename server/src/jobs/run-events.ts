import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../database/sql';

/**
 * Writes the run's whole state as an event of the person who started it and notifies whoever streams to them. Events of one person are
 * numbered in the order of their commits (a lock until the transaction ends), so that "everything after this id" misses nothing; call it
 * as the last statement of the transaction.
 */
export async function emitRunEvent(sequelize: Sequelize, tx: Transaction, runId: string): Promise<void> {
  await rows(
    sequelize,
    `SELECT pg_advisory_xact_lock(hashtextextended('run-events:' || person_id, 0)) FROM runs WHERE id = $1`,
    [runId],
    tx,
  );
  await rows(
    sequelize,
    `WITH event AS (
       INSERT INTO run_events (run_id, person_id, data)
       SELECT id, person_id, jsonb_build_object('runId', id, 'kind', kind, 'state', state, 'phase', phase, 'share', share, 'attempt', attempt,
         'modelId', model_id, 'entity', entity, 'entityId', entity_id, 'problem', problem,
         'at', to_char(clock_timestamp() AT TIME ZONE 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"'))
       FROM runs WHERE id = $1 RETURNING person_id)
     SELECT pg_notify('tallystone_events', person_id::text) FROM event`,
    [runId],
    tx,
  );
}
