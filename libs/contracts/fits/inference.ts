import type { DeclinedMethod } from './schema';

/** How declined applicants enter a fit, in words. */
export const inferenceNames: Readonly<Record<DeclinedMethod, string>> = {
  none: 'accepts only',
  reweighting: 're-weighting',
  parcelling: 'parcelling',
  fuzzy: 'fuzzy inference',
};
