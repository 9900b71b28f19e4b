import type { ModelState } from '@tallystone/contracts/models/schema';
import type { StatusTone } from './status-mark';

const tones: Readonly<Record<ModelState, StatusTone>> = {
  'In development': 'under-way',
  Submitted: 'under-way',
  'In validation': 'under-way',
  Approved: 'kept',
  'Approved with conditions': 'kept',
  'In use': 'kept',
  Rejected: 'refused',
  Retired: 'ended',
};

/** The mark that goes with a version's or a model's state. */
export const stateTone = (state: ModelState): StatusTone => tones[state];

/** In the order of a version's life. */
export const modelStates = Object.keys(tones) as readonly ModelState[];
