/** What a person may do with a scorecard. */
export const scorecardAbilities = ['edit', 'freeze'] as const;
export type ScorecardAbility = (typeof scorecardAbilities)[number];
