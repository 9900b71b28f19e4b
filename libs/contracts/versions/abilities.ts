/** What a person may do with a version. The server says which; the client never decides by role. */
export const versionAbilities = [
  'submit',
  'withdraw',
  'start',
  'conclude',
  'accept',
  'return',
  'replicate',
  'study-stability',
  'write-texts',
  'make-document',
] as const;
export type VersionAbility = (typeof versionAbilities)[number];
export const versionListAbilities = ['freeze'] as const;
/** Sent with the session: has models to look into, and so versions under review to find. */
export const reviewAbilities = ['reviews.read'] as const;
export type ReviewAbility = (typeof reviewAbilities)[number];
