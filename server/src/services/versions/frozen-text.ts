import { conflict } from '../../problems/problem';
import type { Sequelize } from 'sequelize';
import { VersionRow } from '../../models/version';
import { outOfTimeState } from '../out-of-time/cover';
import type { FoundVersion } from './find-version';

/**
 * Specification or result of a version, in the bytes that were hashed. A result holds out-of-time figures, so it is handed out only where they
 * are not covered.
 *
 * @throws Problem 409 for the result while out-of-time is covered
 */
export async function frozenText(sequelize: Sequelize, version: FoundVersion, what: 'specification' | 'result'): Promise<string> {
  if (what === 'result' && (await outOfTimeState(sequelize, version.definitionId)) === 'covered') {
    throw conflict('out-of-time-covered', 'The result holds out-of-time figures, which nobody has opened yet. Open them first, with a reason.');
  }
  const row = await VersionRow.findByPk(version.id, { attributes: [what], raw: true });
  if (!row) throw new Error(`There is no version ${version.id}`);
  return row[what];
}
