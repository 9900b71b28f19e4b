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
