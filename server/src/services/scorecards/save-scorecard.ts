import type { ScorecardSettings } from '@tallystone/contracts/scorecards/schema';
import type { Transaction } from 'sequelize';
import type { Actor } from '../../models/person';
import { ScorecardRow } from '../../models/scorecard';
import { invalid } from '../../problems/problem';
import type { FoundFit } from '../fits/find-fit';
import { appendRecord } from '../record/append';
import type { LoadedScorecard } from './load-scorecard';

/**
 * Writes the settings down. The caller holds the fit's row and has held If-Match against the revision.
 *
 * @throws Problem 422 for reason texts of columns that are not in the scorecard
 */
export async function saveScorecard(tx: Transaction, fit: FoundFit, person: Actor, loaded: LoadedScorecard, settings: ScorecardSettings): Promise<number> {
  const known = new Set(loaded.specification.characteristics.map(({ column }) => column));
  const strangers = Object.keys(settings.reasons.texts).filter((column) => !known.has(column));
  if (strangers.length > 0) {
    throw invalid(strangers.map((column) => ({ code: 'unknown-column', message: `"${column}" is no characteristic of this fit.`, where: { field: 'reasons.texts', column } })));
  }
  const revision = loaded.revision + 1;
  await ScorecardRow.upsert({ fitId: fit.id, settings, revision, changedAt: new Date(), changedBy: person.id }, { transaction: tx });
  await appendRecord(tx, {
    actor: person,
    action: 'scorecard.changed',
    entity: 'scorecard',
    entityId: fit.id,
    modelId: fit.modelId,
    before: loaded.revision === 0 ? null : loaded.settings,
    after: settings,
  });
  return revision;
}
