import type { BinningAbility } from '@tallystone/contracts/binnings/abilities';
import type { BinningState } from '@tallystone/contracts/binnings/schema';
import type { Actor } from '../models/person';
import { type Decision, allowed, forbidden } from './decision';
import { type ModelMembership, canDevelopModel, canReadModel } from './models';
import { type RestsOnRows, withRows } from './rows';

/** What is known of a binning here. */
export interface BinningStanding extends RestsOnRows {
  readonly model: ModelMembership;
  readonly state: BinningState;
}

export const canListBinnings = canReadModel;
export const canStartBinning = canDevelopModel;
export const canReadBinning = (person: Actor, binning: BinningStanding): Decision => canReadModel(person, binning.model);

/** Bins are edited by the modellers of the model, once they are there and as long as something can be fitted on them. */
export function canEditBinning(person: Actor, binning: BinningStanding): Decision {
  const develops = withRows(canDevelopModel(person, binning.model), binning);
  if (!develops.allowed) return develops;
  return binning.state === 'ready' ? allowed : forbidden('The characteristics have not been classed yet.');
}

export function canCancelBinning(person: Actor, binning: BinningStanding): Decision {
  const develops = canDevelopModel(person, binning.model);
  if (!develops.allowed) return develops;
  return binning.state === 'queued' || binning.state === 'classing' ? allowed : forbidden('No run is under way.');
}

export function abilitiesOnBinning(person: Actor, binning: BinningStanding): BinningAbility[] {
  const abilities: [BinningAbility, Decision][] = [
    ['edit', canEditBinning(person, binning)],
    ['cancel', canCancelBinning(person, binning)],
  ];
  return abilities.filter(([, decision]) => decision.allowed).map(([ability]) => ability);
}
