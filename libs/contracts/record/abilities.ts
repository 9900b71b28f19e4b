export const recordAbilities = ['record.read', 'record.read-all', 'record.verify'] as const;
export type RecordAbility = (typeof recordAbilities)[number];
