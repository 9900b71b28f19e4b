import type { ModelState } from '@tallystone/contracts/models/schema';
import type { VersionAbility } from '@tallystone/contracts/versions/abilities';
import type { VersionAct } from '@tallystone/contracts/versions/schema';
import type { Actor } from '../models/person';
import { type Decision, allowed, forbidden, hidden } from './decision';
import { type ModelMembership, canDevelopModel, canReadModel } from './models';
import { type RestsOnRows, haveRows } from './rows';

/** Who has had a hand in a version, and where it stands: what separation of duties is judged by. */
export interface VersionStanding extends RestsOnRows {
  readonly model: ModelMembership;
  readonly state: ModelState;
  /** Everyone who defined the sample, classed, fitted, chose the penalty, scaled, wrote texts, froze or submitted. */
  readonly developedBy: ReadonlySet<string>;
  readonly submittedBy: string | null;
  /** Whoever took it on or concluded since it was last submitted. */
  readonly validators: ReadonlySet<string>;
  readonly concluded: boolean;
}

export const canReadVersion = (person: Actor, version: VersionStanding): Decision => canReadModel(person, version.model);

const stands = (version: VersionStanding, ...states: ModelState[]): boolean => states.includes(version.state);
const wrongState = (version: VersionStanding, act: string): Decision =>
  forbidden(`A version that is "${version.state}" cannot be ${act}.`);

/** Whoever developed, fitted or submitted a version can neither validate nor approve it. */
function separate(person: Actor, version: VersionStanding, from: 'validate' | 'sign'): Decision {
  return version.developedBy.has(person.id)
    ? forbidden(`You took part in developing this version: someone else has to ${from} it.`)
    : allowed;
}

export function canActOnVersion(person: Actor, version: VersionStanding, act: Exclude<VersionAct, 'freeze'>): Decision {
  switch (act) {
    case 'submit': {
      const develops = canDevelopModel(person, version.model);
      if (!develops.allowed) return develops;
      return stands(version, 'In development') ? allowed : wrongState(version, 'submitted');
    }
    case 'withdraw': {
      const develops = canDevelopModel(person, version.model);
      if (!develops.allowed) return develops;
      // Its modellers, not every modeller of the model: who had no hand in it does not take it out of somebody's review.
      if (version.submittedBy !== person.id && !version.developedBy.has(person.id))
        return forbidden('You had no hand in this version: whoever developed or submitted it can withdraw it.');
      if (!stands(version, 'Submitted', 'In validation')) return wrongState(version, 'withdrawn');
      return version.concluded ? forbidden('The validator has concluded: this version can no longer be withdrawn.') : allowed;
    }
    case 'start':
    case 'conclude':
      return canValidate(person, version, act);
    case 'accept':
    case 'return':
      return canSign(person, version);
  }
}

function canValidate(person: Actor, version: VersionStanding, act: 'start' | 'conclude'): Decision {
  const seen = canReadVersion(person, version);
  if (!seen.allowed) return seen;
  if (!person.roles.includes('validator')) return forbidden('Validators do this.');
  const apart = separate(person, version, 'validate');
  if (!apart.allowed) return apart;
  if (act === 'start') return stands(version, 'Submitted') ? allowed : wrongState(version, 'taken into validation');
  if (!stands(version, 'In validation')) return wrongState(version, 'concluded');
  return version.concluded ? forbidden('This version has been concluded already.') : allowed;
}

/** The second signature: compliance, and neither of the two others. */
function canSign(person: Actor, version: VersionStanding): Decision {
  const seen = canReadVersion(person, version);
  if (!seen.allowed) return seen;
  if (!person.roles.includes('compliance')) return forbidden('Compliance does this.');
  const apart = separate(person, version, 'sign');
  if (!apart.allowed) return apart;
  if (version.validators.has(person.id))
    return forbidden('You validated this version: someone else has to sign it for compliance.');
  if (!stands(version, 'In validation')) return wrongState(version, 'signed');
  return version.concluded ? allowed : forbidden('The validator has not concluded yet.');
}

/** A replication is for the validator; a modeller may replicate what they developed themselves. */
export function canReplicate(person: Actor, version: VersionStanding): Decision {
  const seen = canReadVersion(person, version);
  if (!seen.allowed) return seen;
  if (canDevelopModel(person, version.model).allowed || person.roles.includes('validator')) return haveRows(version);
  return forbidden('Validators replicate; a modeller replicates their own models.');
}

const open: ModelState[] = ['In development', 'Submitted', 'In validation'];

/** The author's texts: the modellers of the model, until the second signature. */
export function canWriteTexts(person: Actor, version: VersionStanding): Decision {
  const develops = canDevelopModel(person, version.model);
  if (!develops.allowed) return develops;
  return open.includes(version.state) ? allowed : forbidden('The second signature has closed the texts of this version.');
}

export function canMakeDocument(person: Actor, version: VersionStanding): Decision {
  const seen = canReadVersion(person, version);
  if (!seen.allowed) return seen;
  const may =
    canDevelopModel(person, version.model).allowed ||
    person.roles.some((role) => role === 'validator' || role === 'compliance' || role === 'auditor');
  return may ? allowed : hidden;
}

const acts = ['submit', 'withdraw', 'start', 'conclude', 'accept', 'return'] as const;

export function abilitiesOnVersion(person: Actor, version: VersionStanding): VersionAbility[] {
  const abilities: VersionAbility[] = acts.filter((act) => canActOnVersion(person, version, act).allowed);
  if (canReplicate(person, version).allowed) abilities.push('replicate', 'study-stability');
  if (canWriteTexts(person, version).allowed) abilities.push('write-texts');
  if (canMakeDocument(person, version).allowed) abilities.push('make-document');
  return abilities;
}

/** Why an act that this state allows is not open to this person: told to those who have the role, so that a missing button explains itself. */
export function refusalsOnVersion(person: Actor, version: VersionStanding): Record<string, string> {
  const refusals: Record<string, string> = {};
  const note = (act: (typeof acts)[number], concerned: boolean): void => {
    const decision = canActOnVersion(person, version, act);
    if (concerned && !decision.allowed && decision.as === 403) refusals[act] = decision.reason;
  };
  if (stands(version, 'Submitted')) note('start', person.roles.includes('validator'));
  if (stands(version, 'In validation')) {
    note('conclude', person.roles.includes('validator') && !version.concluded);
    note('accept', person.roles.includes('compliance') && version.concluded);
  }
  return refusals;
}
