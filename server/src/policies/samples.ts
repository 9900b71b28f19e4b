import type { SampleAbility } from '@tallystone/contracts/samples/abilities';
import type { Actor } from '../models/person';
import { type Decision, allowed, forbidden, hidden } from './decision';
import { type ModelMembership, canDevelopModel, canReadModel, canSeeModel } from './models';
import { holds } from './roles';
import { type RestsOnRows, withRows } from './rows';

/** What is known of a sample here. */
export interface SampleStanding extends RestsOnRows {
  readonly model: ModelMembership;
  readonly read: boolean;
  readonly definitions: number;
  readonly busy: boolean;
}

export const canListSamples = canReadModel;
export const canAddSample = canDevelopModel;
export const canReadSample = (person: Actor, sample: SampleStanding): Decision => canReadModel(person, sample.model);

/** An upload belongs to whoever began it; for anyone else it is not there. */
export function canSendUpload(person: Actor, model: ModelMembership, uploadedBy: string): Decision {
  const develops = canDevelopModel(person, model);
  return develops.allowed && uploadedBy !== person.id ? hidden : develops;
}

/** Reading choices can be made anew until a definition rests on the columns. */
export function canReadFile(person: Actor, sample: SampleStanding): Decision {
  const develops = withRows(canDevelopModel(person, sample.model), sample);
  if (!develops.allowed) return develops;
  return sample.definitions === 0
    ? allowed
    : forbidden('A confirmed definition rests on this reading. Upload the file as a new sample to read it otherwise.');
}

export function canDefineSample(person: Actor, sample: SampleStanding): Decision {
  const develops = withRows(canDevelopModel(person, sample.model), sample);
  if (!develops.allowed) return develops;
  return sample.read ? allowed : forbidden('The file has not been read yet. Confirm how it is read first.');
}

/** Flags of the report are answered, and a missing report made, by those who develop the model. */
export const canAnswerFlag = (person: Actor, sample: SampleStanding): Decision => withRows(canDevelopModel(person, sample.model), sample);

/** What is kept, as metadata: an admin, who sees no more of a model, and whoever reads it. */
export const canListKept = canSeeModel;

/** What has arrived of files on their way is kept of applicants too; whose it is concerns retention alone. */
export const seesUploadsOfOthers = (person: Actor): boolean => holds(person, 'admin');

/** Retention is the admin's: those who work with the rows do not decide how long they are there, and an admin sees none of them. */
export function canEraseSample(person: Actor, sample: SampleStanding): Decision {
  const seen = canSeeModel(person, sample.model);
  if (!seen.allowed) return seen;
  return holds(person, 'admin') ? allowed : forbidden('An admin erases the rows of a sample: retention is theirs.');
}

export function canDiscardSample(person: Actor, sample: SampleStanding): Decision {
  // The tombstone stays, so its sample does.
  const develops = withRows(canDevelopModel(person, sample.model), sample);
  if (!develops.allowed) return develops;
  if (sample.definitions > 0) return forbidden('A confirmed definition rests on this sample: it stays.');
  return sample.busy ? forbidden('The file is being read. Cancel that first.') : allowed;
}

export function abilitiesOnSample(person: Actor, sample: SampleStanding): SampleAbility[] {
  const abilities: [SampleAbility, Decision][] = [
    ['read-file', canReadFile(person, sample)],
    ['define', canDefineSample(person, sample)],
    ['discard', canDiscardSample(person, sample)],
  ];
  return abilities.filter(([, decision]) => decision.allowed).map(([ability]) => ability);
}
