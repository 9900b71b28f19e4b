import type { FitAbility } from '@tallystone/contracts/fits/abilities';
import type { FitState } from '@tallystone/contracts/fits/schema';
import type { Actor } from '../models/person';
import { type Decision, allowed, forbidden } from './decision';
import { type ModelMembership, canDevelopModel, canReadModel } from './models';
import { type RestsOnRows, haveRows, withRows } from './rows';

/** What is known of a fit here. */
export interface FitStanding extends RestsOnRows {
  readonly model: ModelMembership;
  readonly state: FitState;
}

export const canListFits = canReadModel;
export const canStartFit = canDevelopModel;
export const canReadFit = (person: Actor, fit: FitStanding): Decision => canReadModel(person, fit.model);

export function canChoosePenalty(person: Actor, fit: FitStanding): Decision {
  const develops = withRows(canDevelopModel(person, fit.model), fit);
  if (!develops.allowed) return develops;
  return fit.state === 'ready' ? allowed : forbidden('This fit has not run to its end: there is no path to choose from.');
}

export function abilitiesOnFit(person: Actor, fit: FitStanding): FitAbility[] {
  const develops = canDevelopModel(person, fit.model).allowed;
  const abilities: FitAbility[] = [];
  if (canChoosePenalty(person, fit).allowed) abilities.push('choose-penalty');
  if (develops && (fit.state === 'queued' || fit.state === 'running')) abilities.push('cancel');
  if (develops && fit.state === 'ready' && haveRows(fit).allowed) abilities.push('open-out-of-time');
  return abilities;
}
