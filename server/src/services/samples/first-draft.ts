import type { ColumnProfile, ColumnRole } from '@tallystone/contracts/samples/columns';
import { singleRoles } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn, DraftContent } from '@tallystone/contracts/samples/definition';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { proposeOutcome } from '../../profiling/guess-outcome';
import { carryDictionary, noteReadAgain } from './dictionary/carry';
import { keepDraft } from './keep-draft';
import type { ReadKinds } from './keep-kind';
import { drawnBySeed } from './keep-values';

/** The draft that a person finds after reading: every suggestion filled in, nothing confirmed. */
export function firstDraft(profiles: readonly ColumnProfile[]): DraftContent {
  const taken = new Set<ColumnRole>();
  const columns = profiles.map((profile): DefinedColumn => {
    let role = profile.suggestedRole;
    if (singleRoles.includes(role)) {
      if (taken.has(role)) role = 'not used';
      taken.add(role);
    }
    const used = role === 'characteristic' && !profile.suggestedProtected;
    return {
      column: profile.column,
      kind: profile.kind,
      // A protected attribute is kept for checks on fairness; as a characteristic it has to be chosen.
      role: role === 'characteristic' && !used ? 'not used' : role,
      protected: profile.suggestedProtected,
      citation: null,
      special: [],
      reason:
        role === 'not used'
          ? profile.suggestion
          : role === 'characteristic' && !used
            ? 'Protected: kept for fairness checks, not for the fit.'
            : null,
    };
  });
  const outcome = profiles.find(({ column }) => columns.some((one) => one.column === column && one.role === 'outcome'));
  const decision = profiles.find(({ column }) => columns.some((one) => one.column === column && one.role === 'decision'));
  const partition = profiles.find(({ column }) => columns.some((one) => one.column === column && one.role === 'partition'));
  // In a column called "declined" 1 and yes are those who were, in one called "accepted" or "decision" 0 and no.
  const words = decision && /declin|reject|refus/i.test(decision.column) ? /^(declined?|rejected?|refused|yes|true|1)$/i : /^(declined?|rejected?|refused|no|false|0)$/i;
  const declined = decision?.mostFrequent.map(({ value }) => value).filter((value) => words.test(value)) ?? [];
  return {
    columns,
    outcome: outcome ? proposeOutcome(outcome) : { good: [], bad: [], indeterminate: [], excluded: [] },
    declined: declined.length > 0 ? { values: declined } : null,
    exclusions: [],
    partition: partition ? byColumn(partition) : drawnBySeed,
  };
}

function byColumn(profile: ColumnProfile): DraftContent['partition'] {
  const matching = (pattern: RegExp): string[] =>
    profile.mostFrequent.map(({ value }) => value).filter((value) => pattern.test(value));
  return {
    by: 'column',
    development: matching(/^(dev|development|train|training)/i),
    holdOut: matching(/^(hold|test|valid)/i),
    outOfTime: matching(/^(oot|out)/i),
  };
}

/**
 * Stores the draft that a reading leaves: what an earlier sample says carried over on the first one, what was decided here kept on any later one.
 *
 * @param readBefore what the reading before took the columns for
 */
export async function writeFirstDraft(
  context: Context,
  tx: Transaction,
  sampleId: string,
  profiles: readonly ColumnProfile[],
  readBefore: ReadKinds,
  personId: string,
): Promise<void> {
  const suggested = await carryDictionary(context.sequelize, tx, sampleId, firstDraft(profiles), profiles);
  const [before] = await rows<{ content: DraftContent }>(
    context.sequelize,
    'SELECT content FROM sample_drafts WHERE sample_id = $1 FOR UPDATE',
    [sampleId],
    tx,
  );
  const again = before ? keepDraft(before.content, suggested, profiles, readBefore) : null;
  if (again) await noteReadAgain(context.sequelize, tx, sampleId, again.kept);
  const content = again?.content ?? suggested;
  await rows(
    context.sequelize,
    `INSERT INTO sample_drafts (sample_id, content, saved_by) VALUES ($1, $2::jsonb, $3)
     ON CONFLICT (sample_id) DO UPDATE SET content = excluded.content, revision = sample_drafts.revision + 1, saved_at = now(), saved_by = excluded.saved_by
     RETURNING sample_id`,
    [sampleId, JSON.stringify(content), personId],
    tx,
  );
}
