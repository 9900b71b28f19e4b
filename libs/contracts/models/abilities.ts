/** Names of what a person may do that does not hang on one model. Sent with the session. */
export const inventoryAbilities = ['models.read', 'models.create', 'models.read-content'] as const;
export type InventoryAbility = (typeof inventoryAbilities)[number];

/** What a person may do with one model. The server says which; the client never decides by role. */
export const modelAbilities = ['edit', 'manage-members', 'develop', 'read-content'] as const;
export type ModelAbility = (typeof modelAbilities)[number];
