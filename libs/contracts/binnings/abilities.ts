/** What a person may do with a binning. The server says which; the client never decides by role. */
export const binningAbilities = ['edit', 'cancel'] as const;
export type BinningAbility = (typeof binningAbilities)[number];
export const binningListAbilities = ['start-binning'] as const;
