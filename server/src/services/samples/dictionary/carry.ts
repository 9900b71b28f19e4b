import { type ColumnProfile, type ColumnRole, singleRoles } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn, DraftContent, SampleDefinitionContent } from '@tallystone/contracts/samples/definition';
import type { CarriedDictionary, DictionaryEntry, KeptDraft } from '@tallystone/contracts/samples/dictionary';
import type { ColumnKind } from '@tallystone/contracts/samples/reading';
import { withColumns } from '@tallystone/contracts/samples/role-holders';
import { isByRule, outcomeColumns } from '@tallystone/contracts/specification/outcome';
import type { OutcomeDefinition } from '@tallystone/contracts/specification/types';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../../database/sql';
import { type ReadKinds, codesOfNumbers, keptKind } from '../keep-kind';
import { type Lost, keepDeclined, keepOutcome, keepParts, withPartition } from '../keep-values';

interface Earlier {
  readonly sampleId: string;
  readonly fileName: string;
  readonly columns: SampleDefinitionContent['columns'];
  /** Null where nobody has defined that sample yet. */
  readonly meanings: Meanings | null;
  /** What reading took its columns for. */
  readonly kinds: ReadKinds | null;
  readonly entries: DictionaryEntry[] | null;
}

const readKinds = '(SELECT jsonb_object_agg(c.name, c.kind) FROM sample_columns c WHERE c.reading_id = e.reading_id) AS kinds';

/** What a definition says of values. */
type Meanings = Pick<SampleDefinitionContent, 'outcome' | 'declined' | 'partition'>;

/** A sample in which words were written, later than the latest with a definition: its roles are a draft, its words are not. */
interface Worded extends Earlier {
  readonly number: number;
}

/**
 * Takes over what the latest earlier sample of the model with a confirmed definition says of columns that have the same name and kind here:
 * role, protection and special codes into the draft, label, unit, description and treatments into the dictionary. What values of the outcome, the
 * decision and the partition mean goes with their columns. Where a later sample has a dictionary and no definition yet, the words are from that one. What is not taken over is kept with its reason, to be shown.
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
  const [defined] = await rows<Worded>(
    sequelize,
    `SELECT e.id AS "sampleId", e.number, e.file_name AS "fileName", d.content -> 'columns' AS columns,
            d.content - 'columns' AS meanings, ${readKinds}, y.entries
       FROM samples s JOIN samples e ON e.model_id = s.model_id AND e.number < s.number
       JOIN LATERAL (SELECT content FROM sample_definitions WHERE sample_id = e.id ORDER BY number DESC LIMIT 1) d ON true
       LEFT JOIN sample_dictionaries y ON y.sample_id = e.id
      WHERE s.id = $1 ORDER BY e.number DESC LIMIT 1`,
    [sampleId],
    tx,
  );
  const [worded] = await rows<Worded>(
    sequelize,
    `SELECT e.id AS "sampleId", e.number, e.file_name AS "fileName", f.content -> 'columns' AS columns, NULL AS meanings,
            ${readKinds}, y.entries
       FROM samples s JOIN samples e ON e.model_id = s.model_id AND e.number < s.number
       JOIN sample_drafts f ON f.sample_id = e.id
       JOIN sample_dictionaries y ON y.sample_id = e.id AND y.saved_at IS NOT NULL
      WHERE s.id = $1 ORDER BY e.number DESC LIMIT 1`,
    [sampleId],
    tx,
  );
  const later = worded && worded.number > (defined?.number ?? 0) ? worded : null;
  const taken = defined ? takeOver(defined, draft, profiles) : null;
  const words = later ? takeOver(later, draft, profiles) : null;
  if (!taken && !words) return draft;
  const content = taken?.content ?? draft;
  const entries = words?.entries ?? taken?.entries ?? [];
  const carried: CarriedDictionary | null = taken
    ? { ...taken.carried, wordsFrom: later?.fileName ?? null }
    : words && { ...words.carried, columns: words.entries.map(({ column }) => column), wordsFrom: later?.fileName ?? null };
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

/** Keeps with the dictionary what became of the draft when the file was read again, beside what was carried over. */
export async function noteReadAgain(sequelize: Sequelize, tx: Transaction, sampleId: string, readAgain: KeptDraft): Promise<void> {
  await rows(
    sequelize,
    `INSERT INTO sample_dictionaries (sample_id, entries, carried) VALUES ($1, '[]'::jsonb, $2::jsonb)
     ON CONFLICT (sample_id) DO UPDATE SET carried = coalesce(sample_dictionaries.carried, '{}'::jsonb) || excluded.carried,
       revision = sample_dictionaries.revision + 1
     RETURNING sample_id`,
    [sampleId, JSON.stringify({ readAgain })],
    tx,
  );
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
  const lost: Lost = [];
  for (const column of earlier.columns) {
    const profile = here.get(column.column);
    const readAs = earlier.kinds?.[column.column];
    const why = profile ? obstacle(column, readAs, profile) : 'This sample has no such column.';
    if (profile && why === null) kept.set(column.column, asHere(column, readAs, profile, lost));
    else if (why !== null) notCarried.push({ column: column.column, why });
  }
  const before = new Set(earlier.columns.map(({ column }) => column));
  for (const { column } of profiles)
    if (!before.has(column)) notCarried.push({ column, why: 'New: the earlier sample has no such column.' });
  // A role that only one column can have is the carried one's, not a newcomer's.
  const taken = new Set([...kept.values()].map(({ role }) => role).filter((role) => singleRoles.includes(role)));
  const columns = draft.columns.map((column): DefinedColumn => {
    const known = kept.get(column.column);
    if (known)
      return { ...column, kind: known.kind, role: known.role, protected: known.protected || column.protected, citation: known.citation, special: known.special, reason: known.reason, ...(known.amounts && { amounts: known.amounts }) };
    return taken.has(column.role) ? { ...column, role: 'not used', reason: 'Another column has this role in the earlier sample.' } : column;
  }); // prettier-ignore
  const content = withPartition(withColumns(draft, columns));
  const decision = earlier.columns.find(({ role }) => role === 'decision')?.column ?? null;
  const definition = earlier.meanings && carryMeanings(earlier.meanings, decision, content, here, lost);
  return {
    content: { ...content, ...definition?.content },
    entries: (earlier.entries ?? []).filter(({ column }) => kept.has(column)),
    carried: {
      sampleId: earlier.sampleId,
      fileName: earlier.fileName,
      columns: [...kept.keys()],
      notCarried,
      wordsFrom: null,
      ...(definition && { definition: definition.told }),
    },
  };
}

/**
 * What values mean here by the earlier definition: good and bad, who was declined, which part. It was confirmed for the column that it names, and
 * holds for that one alone.
 */
function carryMeanings(
  { outcome, declined, partition }: Meanings,
  decision: string | null,
  draft: DraftContent,
  here: ReadonlyMap<string, ColumnProfile>,
  lost: Lost,
): { content: Partial<DraftContent>; told: NonNullable<CarriedDictionary['definition']> } {
  const words = { gone: 'is not in this file', here: 'here' };
  const content: { -readonly [Key in keyof DraftContent]?: DraftContent[Key] } = {};
  const carried: NonNullable<CarriedDictionary['definition']>['carried'] = [];
  /** The profile of this column where it has this role here too; otherwise that it has not is said. */
  const holder = (role: ColumnRole, column: string, what: string): ColumnProfile | undefined => {
    if (draft.columns.find((one) => one.role === role)?.column === column) return here.get(column);
    lost.push({ what, why: `It was said of ${column}, which is not the ${role} here.` });
    return undefined;
  };
  const ofOutcome = holder('outcome', outcomeColumns(outcome)[0], 'Outcome');
  if (ofOutcome) {
    content.outcome = keepOutcome(draftOutcome(outcome), ofOutcome, here, words, lost);
    carried.push('outcome');
  }
  // That nobody was declined was confirmed, too.
  const ofDecision = decision !== null && holder('decision', decision, 'Declined');
  if (ofDecision) {
    content.declined = keepDeclined(declined, ofDecision, words, lost);
    carried.push('declined');
  }
  const ofPartition = 'column' in partition && holder('partition', partition.column, 'Partition');
  if (ofPartition) {
    content.partition = keepParts(partition, ofPartition, words, lost);
    carried.push('partition');
  }
  return { content, told: { carried, lost } };
}

function draftOutcome(outcome: OutcomeDefinition): DraftContent['outcome'] {
  if (!isByRule(outcome)) {
    const { good, bad, indeterminate, excluded } = outcome;
    return { good, bad, indeterminate, excluded };
  }
  const { bad, indeterminate, missing } = outcome.daysPastDue;
  return { good: [], bad: [], indeterminate: [], excluded: [], rule: { bad, indeterminate, missing, monthsOnBook: outcome.monthsOnBook } };
}

function obstacle(column: DefinedColumn, readAs: ColumnKind | undefined, profile: ColumnProfile): string | null {
  if (keptKind(column, readAs, profile) === null) return `It is ${profile.kind} here, and was ${column.kind}.`;
  const stop = profile.flags.find(({ weight }) => weight === 'stop');
  if (stop && column.role !== 'not used' && column.role !== 'identifier') return `Here it cannot be used: ${stop.finding}`;
  return null;
}

/** Texts there that are numbers here take their special codes with them where these are numbers too. */
function asHere(column: DefinedColumn, readAs: ColumnKind | undefined, profile: ColumnProfile, lost: Lost): DefinedColumn {
  const kind = keptKind(column, readAs, profile) ?? profile.kind;
  if (kind === column.kind) return column;
  const { special, someLost } = codesOfNumbers(column.special);
  if (someLost) lost.push({ what: column.column, why: 'It is numeric here: special codes that are no numbers were left out.' });
  return { ...column, kind, special };
}
