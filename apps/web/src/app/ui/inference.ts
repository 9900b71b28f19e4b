import type { DeclinedMethod } from '@tallystone/contracts/fits/schema';

/** How declined applicants enter a fit, in the words of fits and comparisons. */
export const inferenceNames: Readonly<Record<DeclinedMethod, string>> = {
  none: 'accepts only',
  reweighting: 're-weighting',
  parcelling: 'parcelling',
  fuzzy: 'fuzzy inference',
};

/** Printed wherever an inference is chosen or its result is read (Hand and Henley 1993; Crook and Banasik 2004, both from memory). */
export const inferenceCaution =
  'Its assumptions cannot be tested on accepted applicants (Hand and Henley 1993; Crook and Banasik 2004). Performance is measured on known outcomes alone, and the accepts-only fit stands beside it.';
