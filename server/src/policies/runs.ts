import type { RunState } from '@tallystone/contracts/runs/schema';
import type { Actor } from '../models/person';
import { type Decision, allowed, forbidden, hidden } from './decision';
import { holds } from './roles';

/** What these policies need to know of a run. */
export interface RunSubject {
  readonly personId: string;
  readonly state: RunState;
  /** Whether the reader is a member of the run's model. */
  readonly isMember: boolean;
}

const works = (person: Actor, run: RunSubject): boolean => run.isMember && holds(person, 'modeller');

export const readsAllRuns = (person: Actor): boolean => holds(person, 'validator', 'compliance', 'auditor');

export function canReadRun(person: Actor, run: RunSubject): Decision {
  return run.personId === person.id || works(person, run) || readsAllRuns(person) ? allowed : hidden;
}

export function canCancelRun(person: Actor, run: RunSubject): Decision {
  const reads = canReadRun(person, run);
  if (!reads.allowed) return reads;
  return run.personId === person.id || works(person, run)
    ? allowed
    : forbidden('Whoever started a run, or works on its model, can cancel it.');
}
