import type { ModelAbility } from '@tallystone/contracts/models/abilities';
import type { Role } from '@tallystone/contracts/people/schema';
import type { Actor } from '../models/person';
import { type Decision, allowed, forbidden, hidden } from './decision';

/** What these policies need to know of a model. */
export interface ModelMembership {
  readonly memberIds: readonly string[];
}

const has = (person: Actor, ...roles: Role[]): boolean => roles.some((role) => person.roles.includes(role));
/** A member counts as long as they are a modeller: a role that was taken ends the work. */
const isMember = (person: Actor, model: ModelMembership): boolean =>
  has(person, 'modeller') && model.memberIds.includes(person.id);

/** The inventory as such: everyone with a role has some model to see in it, or may make one. */
export function canListModels(person: Actor): Decision {
  return person.roles.length > 0 ? allowed : forbidden('You have no role yet. Ask an admin for one.');
}

/** Reads every model, not only their own. */
export const seesAllModels = (person: Actor): boolean => has(person, 'validator', 'compliance', 'auditor', 'admin');

/** Looks inside models, its own or all: an admin does not. */
export const looksInsideModels = (person: Actor): boolean => has(person, 'modeller', 'validator', 'compliance', 'auditor');

export function canCreateModel(person: Actor): Decision {
  return has(person, 'modeller') ? allowed : forbidden('Modellers enter models in the inventory.');
}

/** What the inventory says of a model. An admin sees this much and no more. */
export function canSeeModel(person: Actor, model: ModelMembership): Decision {
  return isMember(person, model) || seesAllModels(person) ? allowed : hidden;
}

/** What is inside a model: samples, binnings, fits, versions. */
export function canReadModel(person: Actor, model: ModelMembership): Decision {
  return isMember(person, model) || has(person, 'validator', 'compliance', 'auditor') ? allowed : hidden;
}

/** Loads data, classes, fits, freezes: members alone. */
export function canDevelopModel(person: Actor, model: ModelMembership): Decision {
  if (isMember(person, model)) return allowed;
  const seen = canReadModel(person, model);
  return seen.allowed ? forbidden('Only the modellers of this model may do this.') : seen;
}

export function canEditModel(person: Actor, model: ModelMembership): Decision {
  if (isMember(person, model)) return allowed;
  const seen = canSeeModel(person, model);
  return seen.allowed ? forbidden('Only the modellers of this model edit what the inventory says of it.') : seen;
}

/** Members let colleagues in and out; an admin can as well, so that a model is not lost with its last modeller. */
export function canManageMembers(person: Actor, model: ModelMembership): Decision {
  if (isMember(person, model) || has(person, 'admin')) return allowed;
  const seen = canSeeModel(person, model);
  return seen.allowed ? forbidden('Only the modellers of this model, or an admin, say who works on it.') : seen;
}

export function abilitiesOnModel(person: Actor, model: ModelMembership): ModelAbility[] {
  const abilities: [ModelAbility, Decision][] = [
    ['edit', canEditModel(person, model)],
    ['manage-members', canManageMembers(person, model)],
    ['develop', canDevelopModel(person, model)],
    ['read-content', canReadModel(person, model)],
  ];
  return abilities.filter(([, decision]) => decision.allowed).map(([ability]) => ability);
}
