import type { Context } from '../../context';
import { inTransaction } from '../../database/transaction';
import { type Actor, Person } from '../../models/person';
import { invalidField } from '../../problems/problem';
import { demandGoodPassword } from '../passwords/accept';
import { hashPassword, verifyPassword } from '../passwords/prepare';
import { appendRecord } from '../record/append';
import { endSessions } from './end-sessions';
import { countTry, forgive } from './throttle';

/**
 * Sets a new password for the person themselves and ends all their sessions.
 *
 * @throws Problem 422 when the present password is wrong or the new one is on the blocklist; 429 after too many wrong ones
 */
export async function changePassword(
  context: Context,
  actor: Actor,
  asked: { current: string; next: string; address: string },
): Promise<void> {
  const counted = await countTry(context, actor.email, asked.address);
  if (counted.refused) throw counted.problem;
  const person = await Person.findByPk(actor.id, { rejectOnEmpty: true });
  if (!(await verifyPassword(context, asked.current, person.passwordHash)))
    throw invalidField('current', 'password-wrong', 'This is not your present password.');
  await forgive(context, counted.attempt);
  if (asked.next === asked.current)
    throw invalidField('next', 'password-same', 'Choose a password that differs from the present one.');
  demandGoodPassword('next', asked.next, [actor.name, actor.email]);
  const passwordHash = await hashPassword(context, asked.next);
  await inTransaction(context.sequelize, async (tx) => {
    await Person.update({ passwordHash }, { where: { id: actor.id }, transaction: tx });
    await endSessions(context, tx, actor.id);
    await appendRecord(tx, {
      actor,
      action: 'password.changed',
      entity: 'person',
      entityId: actor.id,
      detail: { address: asked.address },
    });
  });
}
