import type { Context } from '../../context';
import { inTransaction } from '../../database/transaction';
import type { Actor } from '../../models/person';
import { appendRecord } from '../record/append';

/** Puts a sign-out into the record; the session itself is ended by whoever holds the request. */
export async function recordSignOut({ sequelize }: Context, actor: Actor, address: string): Promise<void> {
  await inTransaction(sequelize, (tx) => appendRecord(tx, { actor, action: 'session.signed-out', entity: 'session', entityId: null, detail: { address } }));
}
