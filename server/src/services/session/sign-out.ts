import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { inTransaction } from '../../database/transaction';
import type { Actor } from '../../models/person';
import { appendRecord } from '../record/append';

/** Puts a sign-out into the record and lets event streams of the session know; the session itself is ended by whoever holds the request. */
export async function recordSignOut({ sequelize }: Context, actor: Actor, address: string): Promise<void> {
  await inTransaction(sequelize, async (tx) => {
    await rows(sequelize, `SELECT pg_notify('tallystone_sessions', $1)`, [actor.id], tx);
    await appendRecord(tx, { actor, action: 'session.signed-out', entity: 'session', entityId: null, detail: { address } });
  });
}
