import type { ScorecardAbility } from '@tallystone/contracts/scorecards/abilities';
import type { Actor } from '../models/person';
import { type Decision, allowed, forbidden } from './decision';
import type { FitStanding } from './fits';
import { canDevelopModel, canReadModel } from './models';
import { withRows } from './rows';

export const canReadScorecard = (person: Actor, fit: FitStanding): Decision => canReadModel(person, fit.model);

export function canEditScorecard(person: Actor, fit: FitStanding): Decision {
  const develops = withRows(canDevelopModel(person, fit.model), fit);
  if (!develops.allowed) return develops;
  return fit.state === 'ready' ? allowed : forbidden('This fit has not run to its end: there are no points yet.');
}

export function abilitiesOnScorecard(person: Actor, fit: FitStanding): ScorecardAbility[] {
  return canEditScorecard(person, fit).allowed ? ['edit', 'freeze'] : [];
}
