import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';

/**
 * Ends every session of a person at the commit of this transaction: their next request is that of a stranger, and their event streams
 * are closed.
 */
export async function endSessions({ sequelize }: Pick<Context, 'sequelize'>, tx: Transaction, personId: string): Promise<void> {
  await rows(sequelize, 'DELETE FROM session WHERE person_id = $1 RETURNING sid', [personId], tx);
  await rows(sequelize, `SELECT pg_notify('tallystone_sessions', $1)`, [personId], tx);
}
