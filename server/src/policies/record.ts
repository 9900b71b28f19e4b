import type { Actor } from '../models/person';
import { type Decision, allowed, forbidden } from './decision';
import { holds } from './roles';

/** Auditor, validator and compliance read all; an admin everything without what it says of applicants and models; a modeller their own models. */
export function canReadRecord(person: Actor): Decision {
  return person.roles.length > 0 ? allowed : forbidden('You have no role yet. Ask an admin for one.');
}

export const readsWholeRecord = (person: Actor): boolean => holds(person, 'auditor', 'validator', 'compliance');
/** Sees that everything happened, but not what it says, outside of people, sessions and the record itself. */
export const readsRecordOutline = (person: Actor): boolean => holds(person, 'admin');
export const readsOwnModels = (person: Actor): boolean => holds(person, 'modeller');
/** Entities whose acts an admin reads in full: they hold nothing of applicants. */
export const openToAdmins: readonly string[] = ['person', 'session', 'invitation', 'record', 'run', 'policy'];

export function canVerifyRecord(person: Actor): Decision {
  return holds(person, 'auditor', 'validator', 'compliance', 'admin')
    ? allowed
    : forbidden('Auditors, validators, compliance and admins verify the record.');
}
