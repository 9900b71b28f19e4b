import type { Role } from '@tallystone/contracts/people/schema';
import type { Transaction } from 'sequelize';
import { type Actor, Person, PersonRole } from '../../models/person';
import { conflict } from '../../problems/problem';
import { type RecordActor, appendRecord } from '../record/append';

export interface NewPerson {
  readonly name: string;
  readonly email: string;
  readonly passwordHash: string;
  readonly roles: readonly Role[];
  readonly by: 'set-up' | 'invitation' | 'demo';
  /** Who made the account; the person themselves when absent. */
  readonly actor?: RecordActor;
}

/** Opens an account. @throws Problem 409 when the address has one */
export async function createPerson(tx: Transaction, asked: NewPerson): Promise<Actor> {
  const { name, email, passwordHash, roles, by } = asked;
  if (await Person.findOne({ where: { email }, attributes: ['id'], transaction: tx }))
    throw conflict('email-taken', 'There is an account with this address already.');
  const person = await Person.create({ name, email, passwordHash }, { transaction: tx });
  await PersonRole.bulkCreate(roles.map((role) => ({ personId: person.id, role })), { transaction: tx }); // prettier-ignore
  const actor: Actor = { id: person.id, name, email, roles };
  await appendRecord(tx, {
    actor: asked.actor ?? actor,
    action: 'person.created',
    entity: 'person',
    entityId: person.id,
    after: { name, email, roles: [...roles] },
    detail: { by },
  });
  return actor;
}
