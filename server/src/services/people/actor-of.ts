import type { Transaction } from 'sequelize';
import { type Actor, Person, PersonRole } from '../../models/person';

/**
 * A person with their roles as they are now, for acts that a run does on their behalf.
 *
 * @throws when there is no such person
 */
export async function actorOf(personId: string, tx?: Transaction): Promise<Actor> {
  const person = await Person.findByPk(personId, { transaction: tx ?? null, rejectOnEmpty: true });
  return { id: person.id, name: person.name, email: person.email, roles: await rolesOf(personId, tx) };
}

export async function rolesOf(personId: string, tx?: Transaction): Promise<Actor['roles']> {
  const rows = await PersonRole.findAll({
    where: { personId },
    attributes: ['role'],
    order: ['role'],
    raw: true,
    transaction: tx ?? null,
  });
  return rows.map((row) => row.role);
}
