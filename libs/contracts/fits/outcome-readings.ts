import type { Refit } from './outcome-refits';

/** How the indeterminates were read, in words. */
export const readingNames: Readonly<Record<Refit['indeterminates'], string>> = {
  'as they are': 'left out, as defined',
  'as good': 'all good',
  'as bad': 'all bad',
};
