import { erasedWords } from '@tallystone/contracts/samples/erased-words';
import type { Erasure } from '@tallystone/contracts/samples/erasure';
import { type Decision, allowed } from './decision';

/** Whatever rests on a sample knows whether its rows are still there. */
export interface RestsOnRows {
  readonly erased: Erasure | null;
}

/** What needs the rows of a sample, or leads to nothing without them, ends with their erasure; what was counted is read on. */
export const haveRows = ({ erased }: RestsOnRows): Decision => (erased === null ? allowed : { allowed: false, reason: erasedWords(erased), as: 409 });

/** The decision, and where it allows, whether the rows are there. */
export const withRows = (decision: Decision, standing: RestsOnRows): Decision => (decision.allowed ? haveRows(standing) : decision);
