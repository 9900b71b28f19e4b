import type { Context } from '../../context';
import { inTransaction } from '../../database/transaction';
import { fn } from 'sequelize';
import { type Actor, Person } from '../../models/person';
import { Problem } from '../../problems/problem';
import { nobodysHash, verifyPassword } from '../passwords/prepare';
import { rolesOf } from '../people/actor-of';
import { appendRecord, nobody } from '../record/append';
import { type Try, countTry, forgive } from './throttle';

export interface Credentials {
  readonly email: string;
  readonly password: string;
  readonly address: string;
}

/** The same words whether the account, the password or the state is the reason. */
const wrong = (): Problem => new Problem(401, 'sign-in-failed', 'The e-mail address or the password is not right.');

/**
 * Finds the person these credentials belong to. Every outcome is recorded.
 *
 * @throws Problem 401 for a wrong address, a wrong password or a disabled account, alike; 429 after too many failures
 */
export async function signIn(context: Context, credentials: Credentials): Promise<Actor> {
  const person = await Person.findOne({ where: { email: credentials.email } });
  const attempt = await demandPatience(context, credentials, person);
  const right = await verifyPassword(context, credentials.password, person?.passwordHash ?? nobodysHash);
  if (!person || !right || person.state !== 'active') {
    await recordFailure(context, credentials, person, person && right ? 'disabled' : 'wrong');
    throw wrong();
  }
  await forgive(context, attempt);
  return inTransaction(context.sequelize, async (tx) => {
    const actor: Actor = { id: person.id, name: person.name, email: person.email, roles: await rolesOf(person.id, tx) };
    await Person.update({ lastSignInAt: fn('clock_timestamp') }, { where: { id: person.id }, transaction: tx });
    await appendRecord(tx, {
      actor,
      action: 'session.signed-in',
      entity: 'session',
      entityId: null,
      detail: { address: credentials.address },
    });
    return actor;
  });
}

async function demandPatience(context: Context, credentials: Credentials, person: Person | null): Promise<Try> {
  const counted = await countTry(context, credentials.email, credentials.address);
  if (!counted.refused) return counted.attempt;
  // Once for each spell: otherwise whoever hammers at the door could fill the record.
  if (counted.first) await recordFailure(context, credentials, person, 'throttled');
  throw counted.problem;
}

async function recordFailure(
  context: Context,
  { address }: Credentials,
  person: Person | null,
  cause: 'wrong' | 'disabled' | 'throttled',
): Promise<void> {
  await inTransaction(context.sequelize, (tx) =>
    appendRecord(tx, {
      actor: nobody(person ? 'someone at the door' : 'unknown'),
      action: 'session.sign-in-failed',
      entity: 'session',
      entityId: null,
      detail: { address, email: person?.email ?? null, cause },
    }),
  );
}
