import type { PersonState, Role } from '@tallystone/contracts/people/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';

export interface PersonRow {
  readonly id: string;
  readonly name: string;
  readonly email: string;
  readonly roles: Role[];
  readonly state: PersonState;
  readonly createdAt: Date;
  readonly lastSignInAt: Date | null;
  readonly revision: number;
}

const columns = `p.id, p.name, p.email, p.state, p.revision, p.created_at AS "createdAt", p.last_sign_in_at AS "lastSignInAt",
  ARRAY(SELECT r.role FROM person_roles r WHERE r.person_id = p.id ORDER BY r.role) AS roles`;

export function listPeople(sequelize: Sequelize): Promise<PersonRow[]> {
  return rows<PersonRow>(sequelize, `SELECT ${columns} FROM people p ORDER BY p.name, p.email`);
}

/** One person; with a transaction the row is locked for a change. */
export async function findPerson(sequelize: Sequelize, id: string, tx: Transaction | null = null): Promise<PersonRow | null> {
  const [person] = await rows<PersonRow>(
    sequelize,
    `SELECT ${columns} FROM people p WHERE p.id = $1 ${tx ? 'FOR UPDATE OF p' : ''}`,
    [id],
    tx,
  );
  return person ?? null;
}
