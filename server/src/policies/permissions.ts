import type { Actor } from '../models/person';
import { type Decision, allowed, forbidden } from './decision';
import { type ModelMembership, canReadModel } from './models';
import { holds } from './roles';
import { type RestsOnRows, withRows } from './rows';

/** What is known of a confirmed definition with protected columns. */
export interface ProtectionStanding extends RestsOnRows {
  readonly model: ModelMembership;
  /** Who confirmed it. */
  readonly definedBy: string;
}

/** What is protected, and who permitted it, is read by all who read the model. */
export const canReadProtected = (person: Actor, definition: ProtectionStanding): Decision => canReadModel(person, definition.model);

/** Compliance alone permits, and nobody permits what they work on themselves: one person may hold both roles. */
export function canPermitProtected(person: Actor, definition: ProtectionStanding): Decision {
  const seen = canReadProtected(person, definition);
  if (!seen.allowed) return seen;
  if (!holds(person, 'compliance')) return forbidden('Compliance permits a protected column, or withdraws that.');
  if (definition.definedBy === person.id || definition.model.memberIds.includes(person.id))
    return forbidden('You take part in developing this model: somebody else of compliance has to decide on its protected columns.');
  return withRows(allowed, definition);
}
