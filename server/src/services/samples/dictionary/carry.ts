import { type ColumnProfile, singleRoles } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn, DraftContent, SampleDefinitionContent } from '@tallystone/contracts/samples/definition';
import type { CarriedDictionary, DictionaryEntry } from '@tallystone/contracts/samples/dictionary';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../../database/sql';

interface Earlier {
  readonly sampleId: string;
  readonly fileName: string;
  readonly columns: SampleDefinitionContent['columns'];
  readonly entries: DictionaryEntry[] | null;
}

/**
 * Takes over what the latest earlier sample of the model with a confirmed definition says of columns that have the same name and kind here:
 * role, protection and special codes into the draft, label, unit, description and treatments into the dictionary. What is not taken over is
 * kept with its reason, to be shown.
 *
 * @returns the draft as it is to be stored
 */
export async function carryDictionary(
  sequelize: Sequelize,
  tx: Transaction,
  sampleId: string,
  draft: DraftContent,
  profiles: readonly ColumnProfile[],
): Promise<DraftContent> {
  const [earlier] = await rows<Earlier>(
    sequelize,
    `SELECT e.id AS "sampleId", e.file_name AS "fileName", d.content -> 'columns' AS columns, y.entries
       FROM samples s JOIN samples e ON e.model_id = s.model_id AND e.number < s.number
       JOIN LATERAL (SELECT content FROM sample_definitions WHERE sample_id = e.id ORDER BY number DESC LIMIT 1) d ON true
       LEFT JOIN sample_dictionaries y ON y.sample_id = e.id
      WHERE s.id = $1 ORDER BY e.number DESC LIMIT 1`,
    [sampleId],
    tx,
  );
  if (!earlier) return draft;
  const { content, entries, carried } = takeOver(earlier, draft, profiles);
  await rows(
    sequelize,
    `INSERT INTO sample_dictionaries (sample_id, entries, carried) VALUES ($1, $2::jsonb, $3::jsonb)
     ON CONFLICT (sample_id) DO UPDATE SET carried = excluded.carried, revision = sample_dictionaries.revision + 1,
       entries = CASE WHEN sample_dictionaries.saved_at IS NULL THEN excluded.entries ELSE sample_dictionaries.entries END
     RETURNING sample_id`,
    [sampleId, JSON.stringify(entries), JSON.stringify(carried)],
    tx,
  );
  return content;
}

/** What there is to carry, and what speaks against it. */
export function takeOver(
  earlier: Earlier,
  draft: DraftContent,
  profiles: readonly ColumnProfile[],
): { content: DraftContent; entries: DictionaryEntry[]; carried: CarriedDictionary } {
  const here = new Map(profiles.map((profile) => [profile.column, profile]));
  const notCarried: CarriedDictionary['notCarried'] = [];
  const kept = new Map<string, DefinedColumn>();
  for (const column of earlier.columns) {
    const why = obstacle(column, here.get(column.column));
    if (why === null) kept.set(column.column, column);
    else notCarried.push({ column: column.column, why });
  }
  const before = new Set(earlier.columns.map(({ column }) => column));
  for (const { column } of profiles)
    if (!before.has(column)) notCarried.push({ column, why: 'New: the earlier sample has no such column.' });
  // A role that only one column can have is the carried one's, not a newcomer's.
  const taken = new Set([...kept.values()].map(({ role }) => role).filter((role) => singleRoles.includes(role)));
  const columns = draft.columns.map((column): DefinedColumn => {
    const known = kept.get(column.column);
    if (known)
      return { ...column, role: known.role, protected: known.protected || column.protected, citation: known.citation, special: known.special, reason: known.reason };
    return taken.has(column.role) ? { ...column, role: 'not used', reason: 'Another column has this role in the earlier sample.' } : column;
  }); // prettier-ignore
  return {
    content: { ...draft, columns },
    entries: (earlier.entries ?? []).filter(({ column }) => kept.has(column)),
    carried: { sampleId: earlier.sampleId, fileName: earlier.fileName, columns: [...kept.keys()], notCarried },
  };
}

function obstacle(column: DefinedColumn, profile: ColumnProfile | undefined): string | null {
  if (!profile) return 'This sample has no such column.';
  if (profile.kind !== column.kind && !(profile.kind === 'numeric' && column.kind === 'categorical'))
    return `It is ${profile.kind} here, and was ${column.kind}.`;
  const stop = profile.flags.find(({ weight }) => weight === 'stop');
  if (stop && column.role !== 'not used' && column.role !== 'identifier') return `Here it cannot be used: ${stop.finding}`;
  return null;
}
