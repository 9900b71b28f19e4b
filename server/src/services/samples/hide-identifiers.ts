import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DraftContent, SampleDefinitionContent } from '@tallystone/contracts/samples/definition';
import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { deriveKey } from '../../config/keys';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { type ColumnContent, readContents, replaceColumn } from '../../storage/columnStore';
import { runInThread } from '../../threads/run-in-thread';
import { columnsOf } from './carry-out';
import { profilesOf } from './columns-of';
import type { FoundSample } from './find-sample';

/**
 * Columns that a person says identify applicants, where reading did not see it: from the confirmation of that role on they are kept as keyed
 * hashes, like those that were seen.
 */

/** A column as it is kept from the confirmation on. */
export interface HiddenColumn {
  readonly profile: ColumnProfile;
  readonly contents: readonly ColumnContent[];
}

const said = { kind: 'identifier', finding: 'Confirmed as an identifier.' } as const;

/** Names of the identifiers of a draft that are still kept in clear. */
export function identifiersInClear(columns: DraftContent['columns'], profiles: readonly ColumnProfile[]): string[] {
  const clear = new Set(profiles.filter(({ hashed }) => !hashed).map(({ column }) => column));
  return columns.filter(({ column, role }) => role === 'identifier' && clear.has(column)).map(({ column }) => column);
}

/**
 * What stands in the way of hiding these columns: an earlier definition of the sample, confirmed and never changed, reads their values.
 */
export async function neededInClear(
  sequelize: Sequelize,
  sampleId: string,
  columns: readonly string[],
  tx: Transaction | null = null,
): Promise<ProblemItem[]> {
  if (columns.length === 0) return [];
  const definitions = await rows<{ number: number; content: SampleDefinitionContent }>(
    sequelize,
    'SELECT number, content FROM sample_definitions WHERE sample_id = $1 ORDER BY number',
    [sampleId],
    tx,
  );
  return columns.flatMap((column) => {
    const reader = definitions.find(({ content }) => {
      const role = content.columns.find((entry) => entry.column === column)?.role ?? 'not used';
      return !['identifier', 'not used'].includes(role) || columnsOf(content).has(column);
    });
    if (!reader) return [];
    const message = `${column} cannot become an identifier: definition ${reader.number} of this sample reads its values, and identifiers are kept as keyed hashes. Bring the file in again for a sample of its own.`;
    return [{ code: 'needed-in-clear', message, where: { section: 'columns', column } }];
  });
}

/** Works out, without storing it, what the identifiers that are in clear are replaced by. One column in memory at a time, and its result. */
export async function hideIdentifiers(
  context: Context,
  sample: FoundSample,
  columns: DraftContent['columns'],
  signal: AbortSignal,
): Promise<HiddenColumn[]> {
  const { readingId, reading } = sample;
  if (readingId === null || reading === null) return [];
  const profiles = await profilesOf(context.sequelize, readingId);
  const names = new Set(identifiersInClear(columns, profiles));
  const key = deriveKey(context.config.keys.identifiers, 'sample columns');
  const hidden: HiddenColumn[] = [];
  for (const before of profiles.filter(({ column }) => names.has(column))) {
    const { column: name, position } = before;
    const clear = await readContents(context.sequelize, readingId, position);
    const { contents, writings } = await runInThread(
      'sample.hide',
      { contents: clear, missing: reading.missing, key },
      { signal, transfer: clear.map(({ buffer }) => buffer) },
    );
    const profile = await runInThread(
      'sample.profile',
      { name, position, contents: contents.map(({ content }) => content), choices: reading, personal: said, writings, outcome: null },
      { signal },
    );
    // How long its texts are is no value of any of them.
    hidden.push({ profile: { ...profile, text: before.text }, contents });
  }
  return hidden;
}

/** Stores them in place of the columns in clear, with the definition that says so or not at all. */
export async function storeHidden(
  sequelize: Sequelize,
  tx: Transaction,
  readingId: string,
  hidden: readonly HiddenColumn[],
): Promise<void> {
  for (const { profile, contents } of hidden) {
    const { position, column, kind, hashed } = profile;
    await replaceColumn(sequelize, tx, readingId, position, contents);
    await rows(
      sequelize,
      'DELETE FROM sample_columns WHERE reading_id = $1 AND position = $2 RETURNING position',
      [readingId, position],
      tx,
    );
    await rows(
      sequelize,
      'INSERT INTO sample_columns (reading_id, position, name, kind, hashed, profile) VALUES ($1, $2, $3, $4, $5, $6::jsonb) RETURNING position',
      [readingId, position, column, kind, hashed, JSON.stringify(profile)],
      tx,
    );
  }
}
