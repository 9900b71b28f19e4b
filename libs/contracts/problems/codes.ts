/**
 * Codes that any endpoint can answer with. An entity adds its own beside its schema. A code is a promise to programs: it never changes
 * its meaning; its text may.
 */
export const problemCodes = {
  invalid: 'invalid',
  malformed: 'malformed',
  signedOut: 'signed-out',
  forbidden: 'forbidden',
  crossSite: 'cross-site',
  notFound: 'not-found',
  conflict: 'conflict',
  matchMissing: 'match-missing',
  stale: 'stale',
  keyReused: 'idempotency-key-reused',
  tooMany: 'too-many',
  tooLarge: 'too-large',
  unsupported: 'unsupported-media-type',
  unavailable: 'unavailable',
  diskFull: 'disk-full',
  internal: 'internal',
} as const;
