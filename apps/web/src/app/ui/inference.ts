/** Printed wherever an inference is chosen or its result is read (Hand and Henley 1993; Crook and Banasik 2004, both from memory). */
export const inferenceCaution =
  'Its assumptions cannot be tested on accepted applicants (Hand and Henley 1993; Crook and Banasik 2004). Performance is measured on known outcomes alone, and the accepts-only fit stands beside it.';
