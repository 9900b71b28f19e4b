/** What a person may do with a fit. The server says which; the client never decides by role. */
export const fitAbilities = ['choose-penalty', 'cancel', 'open-out-of-time'] as const;
export type FitAbility = (typeof fitAbilities)[number];
export const fitListAbilities = ['start-fit'] as const;
