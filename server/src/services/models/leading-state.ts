import type { ModelState } from '@tallystone/contracts/models/schema';
import type { Sequelize, Transaction } from 'sequelize';

/** Where the state of a model's leading version comes from. The versions' part of the product states it; until a version is frozen a model is "In development". */
export type LeadingStateSource = (sequelize: Sequelize, modelIds: readonly string[], tx: Transaction | null) => Promise<ReadonlyMap<string, ModelState>>;

let source: LeadingStateSource | null = null;

/** Called once by the versions' services when they are loaded. */
export function stateOfVersions(given: LeadingStateSource): void {
  source = given;
}

export async function leadingStates(sequelize: Sequelize, modelIds: readonly string[], tx: Transaction | null = null): Promise<ReadonlyMap<string, ModelState>> {
  return source === null || modelIds.length === 0 ? new Map() : source(sequelize, modelIds, tx);
}
