import type { Transaction } from 'sequelize';
import type { Context } from '../context';
import { rows } from '../database/sql';
import { within } from '../jobs/queue';

export interface Letter {
  readonly to: string;
  readonly subject: string;
  /** Plain text. */
  readonly body: string;
}

/**
 * Puts a letter into the outbox within the caller's transaction: it goes out once that commits and not otherwise.
 *
 * @returns its id in the outbox
 */
export async function postLetter(
  { sequelize, boss }: Pick<Context, 'sequelize' | 'boss'>,
  tx: Transaction,
  letter: Letter,
): Promise<string> {
  const [{ id }] = await rows<{ id: string }>(
    sequelize,
    'INSERT INTO mail_outbox (recipient, subject, body) VALUES ($1, $2, $3) RETURNING id',
    [letter.to, letter.subject, letter.body],
    tx,
  );
  await boss.send('mail', { mailId: id }, { db: within(sequelize, tx) });
  await rows(sequelize, `SELECT pg_notify('tallystone_queue', 'mail')`, [], tx);
  return id;
}
