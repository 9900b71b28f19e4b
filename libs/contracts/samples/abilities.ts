/** What a person may do with one sample. */
export const sampleAbilities = ['read-file', 'define', 'discard'] as const;
export type SampleAbility = (typeof sampleAbilities)[number];
