import type { PersonAbility, PersonState } from '@tallystone/contracts/people/schema';
import type { Actor } from '../models/person';
import { type Decision, allowed, forbidden } from './decision';
import { holds } from './roles';

interface Subject {
  readonly id: string;
  readonly state: PersonState;
}

/** Admins look after people; compliance and auditors read everything. */
export function canReadPeople(person: Actor): Decision {
  return holds(person, 'admin', 'compliance', 'auditor')
    ? allowed
    : forbidden('Admins, compliance and auditors see who has an account.');
}

export function canInvite(person: Actor): Decision {
  return holds(person, 'admin') ? allowed : forbidden('Admins invite people.');
}

export function canManagePeople(person: Actor): Decision {
  return holds(person, 'admin') ? allowed : forbidden('Admins give and take roles.');
}

/** Nobody grants a role to themselves, nor takes one. */
export function canChangeRoles(person: Actor, subject: Subject): Decision {
  const manages = canManagePeople(person);
  if (!manages.allowed) return manages;
  return subject.id === person.id ? forbidden('Nobody changes their own roles. Ask another admin.') : allowed;
}

export function canChangeState(person: Actor, subject: Subject): Decision {
  const manages = canManagePeople(person);
  if (!manages.allowed) return manages;
  return subject.id === person.id ? forbidden('Nobody disables or enables themselves. Ask another admin.') : allowed;
}

export function abilitiesOnPerson(person: Actor, subject: Subject): PersonAbility[] {
  const abilities: PersonAbility[] = [];
  if (canChangeRoles(person, subject).allowed) abilities.push('change-roles');
  if (canChangeState(person, subject).allowed) abilities.push(subject.state === 'active' ? 'disable' : 'enable');
  return abilities;
}
