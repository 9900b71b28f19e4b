import type { Actor } from '../models/person';
import type { Decision } from './decision';
import { type ModelMembership, canDevelopModel, canReadModel } from './models';
import { type RestsOnRows, withRows } from './rows';

/** What is known of a sample definition with its cover. */
export interface CoverStanding extends RestsOnRows {
  readonly model: ModelMembership;
}

/** Whether a cover was lifted, by whom and why, is read by all who read the model; it is lifted by those who develop it. */
export const canReadOutOfTime = (person: Actor, definition: CoverStanding): Decision => canReadModel(person, definition.model);
export const canOpenOutOfTime = (person: Actor, definition: CoverStanding): Decision => withRows(canDevelopModel(person, definition.model), definition);
