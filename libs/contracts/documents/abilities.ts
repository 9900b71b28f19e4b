/** Sent with the session: has models to look into, and so documents to find. */
export const documentAbilities = ['documents.read'] as const;
export type DocumentAbility = (typeof documentAbilities)[number];
