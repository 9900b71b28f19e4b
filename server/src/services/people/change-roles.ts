import type { PersonState, Role } from '@tallystone/contracts/people/schema';
import { literal, type Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { type Actor, Person, PersonRole } from '../../models/person';
import { conflict } from '../../problems/problem';
import { appendRecord } from '../record/append';
import { endSessions } from '../session/end-sessions';
import { type PersonRow, findPerson } from './list';

const lock = 7_415_003;

/** Gives and takes roles so that exactly these remain; ends the person's sessions when anything changed. */
export async function changeRoles(
  context: Context,
  tx: Transaction,
  actor: Actor,
  subject: PersonRow,
  asked: { roles: readonly Role[]; reason: string },
): Promise<PersonRow> {
  await holdAdmins(context, tx);
  const before = [...subject.roles].sort();
  const after = [...asked.roles].sort();
  if (before.join() === after.join()) return subject;
  await PersonRole.destroy({ where: { personId: subject.id }, transaction: tx });
  await PersonRole.bulkCreate(after.map((role) => ({ personId: subject.id, role })), { transaction: tx }); // prettier-ignore
  await demandAnAdmin(context, tx);
  await touch(tx, subject.id);
  await endSessions(context, tx, subject.id);
  await appendRecord(tx, {
    actor,
    action: 'person.roles-changed',
    entity: 'person',
    entityId: subject.id,
    before: { roles: before },
    after: { roles: after },
    detail: { name: subject.name, email: subject.email },
    reason: asked.reason,
  });
  return (await findPerson(context.sequelize, subject.id, tx))!;
}

/** Disables or enables an account; a disabled person's sessions end. */
export async function changeState(
  context: Context,
  tx: Transaction,
  actor: Actor,
  subject: PersonRow,
  asked: { state: PersonState; reason: string },
): Promise<PersonRow> {
  await holdAdmins(context, tx);
  if (subject.state === asked.state) throw conflict('same-state', `This person is ${asked.state} already.`);
  await Person.update({ state: asked.state }, { where: { id: subject.id }, transaction: tx });
  await demandAnAdmin(context, tx);
  await touch(tx, subject.id);
  await endSessions(context, tx, subject.id);
  await appendRecord(tx, {
    actor,
    action: asked.state === 'disabled' ? 'person.disabled' : 'person.enabled',
    entity: 'person',
    entityId: subject.id,
    before: { state: subject.state },
    after: { state: asked.state },
    detail: { name: subject.name, email: subject.email },
    reason: asked.reason,
  });
  return (await findPerson(context.sequelize, subject.id, tx))!;
}

/** One change of this kind at a time: two admins who demote each other at the same moment would otherwise leave none. */
async function holdAdmins({ sequelize }: Context, tx: Transaction): Promise<void> {
  await rows(sequelize, 'SELECT pg_advisory_xact_lock($1)', [lock], tx);
}

async function demandAnAdmin({ sequelize }: Context, tx: Transaction): Promise<void> {
  const [{ admins }] = await rows<{ admins: number }>(
    sequelize,
    `SELECT count(*)::int AS admins FROM people p JOIN person_roles r ON r.person_id = p.id WHERE r.role = 'admin' AND p.state = 'active'`,
    [],
    tx,
  );
  if (admins === 0)
    throw conflict('last-admin', 'This would leave nobody who can look after people. Make another person admin first.');
}

const touch = (tx: Transaction, id: string) =>
  Person.update({ revision: literal('revision + 1') }, { where: { id }, transaction: tx });
