/** Names of what a person may do that does not hang on one row. Sent with the session. */
export const peopleAbilities = ['people.read', 'people.invite', 'people.manage'] as const;
export type PeopleAbility = (typeof peopleAbilities)[number];
