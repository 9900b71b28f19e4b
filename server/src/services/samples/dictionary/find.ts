import type { CarriedDictionary, KeptDraft, ColumnLabels, Dictionary, DictionaryEntry } from '@tallystone/contracts/samples/dictionary';
import { labelWords } from '@tallystone/contracts/samples/labels';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../../database/sql';
import type { Actor } from '../../../models/person';
import { canDefineSample } from '../../../policies/samples';
import { appendRecord } from '../../record/append';
import type { FoundSample } from '../find-sample';

export interface FoundDictionary {
  readonly sample: FoundSample;
  readonly entries: DictionaryEntry[];
  readonly revision: number;
  readonly carried: CarriedDictionary | null;
  readonly readAgain: KeptDraft | null;
  readonly savedAt: Date | null;
  readonly savedBy: string | null;
}

const nothing: Omit<FoundDictionary, 'sample'> = { entries: [], revision: 0, carried: null, readAgain: null, savedAt: null, savedBy: null };

/** The dictionary of a sample, empty where nothing was written yet; null without a sample. */
export async function findDictionary(
  sequelize: Sequelize,
  sample: FoundSample | null,
  tx: Transaction | null = null,
): Promise<FoundDictionary | null> {
  if (!sample) return null;
  const [found = nothing] = await rows<Omit<FoundDictionary, 'sample'>>(
    sequelize,
    `SELECT d.entries, d.revision, d.carried -> 'readAgain' AS "readAgain", d.saved_at AS "savedAt", p.name AS "savedBy",
            CASE WHEN d.carried ? 'sampleId' THEN '{"wordsFrom": null}'::jsonb || (d.carried - 'readAgain') END AS carried
       FROM sample_dictionaries d LEFT JOIN people p ON p.id = d.saved_by WHERE d.sample_id = $1`,
    [sample.id],
    tx,
  );
  return { ...found, sample };
}

export const presentDictionary = (dictionary: FoundDictionary, person: Actor): Dictionary => ({
  entries: dictionary.entries,
  revision: dictionary.revision,
  savedAt: dictionary.savedAt?.toISOString() ?? null,
  savedBy: dictionary.savedBy,
  carried: dictionary.carried,
  readAgain: dictionary.readAgain,
  abilities: canDefineSample(person, dictionary.sample).allowed ? ['edit'] : [],
});

/** Saves all entries; the caller has held If-Match against the revision, with the sample's row locked. Says in the record which columns changed. */
export async function writeDictionary(
  sequelize: Sequelize,
  tx: Transaction,
  person: Actor,
  before: FoundDictionary,
  entries: readonly DictionaryEntry[],
  from: 'page' | 'file',
): Promise<FoundDictionary> {
  const { sample } = before;
  await rows(
    sequelize,
    `INSERT INTO sample_dictionaries (sample_id, entries, saved_at, saved_by) VALUES ($1, $2::jsonb, now(), $3)
     ON CONFLICT (sample_id) DO UPDATE SET entries = excluded.entries, revision = sample_dictionaries.revision + 1, saved_at = now(),
       saved_by = excluded.saved_by RETURNING revision`,
    [sample.id, JSON.stringify(entries), person.id],
    tx,
  );
  const was = new Map(before.entries.map((entry) => [entry.column, JSON.stringify(entry)]));
  const changed = entries.filter((entry) => was.get(entry.column) !== JSON.stringify(entry)).map(({ column }) => column);
  const dropped = before.entries
    .filter(({ column }) => !entries.some((entry) => entry.column === column))
    .map(({ column }) => column);
  await appendRecord(tx, {
    actor: person,
    action: 'sample.dictionary-saved',
    entity: 'sample',
    entityId: sample.id,
    modelId: sample.modelId,
    after: { columns: [...changed, ...dropped], from },
  });
  const saved = await findDictionary(sequelize, sample, tx);
  if (!saved) throw new Error(`The dictionary of sample ${sample.id} is gone`);
  return saved;
}

/** What the dictionary says of the sample that a definition is of; null where nothing was ever written. */
export async function entriesOf(sequelize: Sequelize, definitionId: string, tx: Transaction | null = null): Promise<DictionaryEntry[] | null> {
  const [found] = await rows<{ entries: DictionaryEntry[] }>(
    sequelize,
    'SELECT y.entries FROM sample_definitions d JOIN sample_dictionaries y ON y.sample_id = d.sample_id WHERE d.id = $1',
    [definitionId],
    tx,
  );
  return found?.entries ?? null;
}

/** Labels and units of the sample that a definition is of. */
export async function labelsOf(sequelize: Sequelize, definitionId: string, tx: Transaction | null = null): Promise<ColumnLabels> {
  const entries = (await entriesOf(sequelize, definitionId, tx)) ?? [];
  const labels = entries.map(({ column, label, unit }) => ({ column, label, unit }));
  return { labels: labels.filter(({ label, unit }) => label !== '' || unit !== '') };
}

/** How a column is called: "Card utilisation (%)", or its heading where the dictionary has no words for it. */
export function labelOf(labels: ColumnLabels['labels'], column: string): string {
  const found = labels.find((entry) => entry.column === column);
  return found ? labelWords(found) : column;
}
