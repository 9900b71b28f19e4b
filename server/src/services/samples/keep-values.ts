import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DraftContent, DraftOutcome } from '@tallystone/contracts/samples/definition';
import type { KeptDraft } from '@tallystone/contracts/samples/dictionary';

export type Lost = KeptDraft['lost'];
type ByColumn = Extract<DraftContent['partition'], { by: 'column' }>;

/** How it is said that something does not hold here as it did there. */
export interface LostWords {
  /** After values. */
  readonly gone: string;
  /** After what a column is not. */
  readonly here: string;
}

/** Whether a value still stands in the file; where the profile does not list all of them nobody can tell, and it is kept. */
const isThere =
  ({ valuesComplete, mostFrequent, missingTokens }: ColumnProfile) =>
  (value: string): boolean =>
    !valuesComplete || [...mostFrequent, ...missingTokens].some((entry) => entry.value === value);

/** The values of each list that still stand in the column, and those of all lists that do not. */
function sift<Lists extends Record<string, readonly string[]>>(
  lists: Lists,
  profile: ColumnProfile,
): { kept: { [Key in keyof Lists]: string[] }; gone: string } {
  const there = isThere(profile);
  const kept = Object.fromEntries(Object.entries(lists).map(([key, values]) => [key, values.filter(there)]));
  const gone = Object.values(lists)
    .flat()
    .filter((value) => !there(value));
  return { kept: kept as { [Key in keyof Lists]: string[] }, gone: gone.map((value) => JSON.stringify(value)).join(', ') };
}

/** What an outcome says that still holds for the column that has its role, by values or by rule. */
export function keepOutcome(
  { rule, ...values }: DraftOutcome,
  profile: ColumnProfile,
  here: ReadonlyMap<string, ColumnProfile>,
  words: LostWords,
  lost: Lost,
): DraftOutcome {
  const { kept, gone } = sift(values, profile);
  // Under a rule the lists do not count.
  if (!rule && gone !== '') lost.push({ what: 'Outcome', why: `${gone} ${words.gone}.` });
  if (!rule) return kept;
  if (profile.kind !== 'numeric') {
    lost.push({ what: 'Outcome by rule', why: `${profile.column} holds no numbers ${words.here}.` });
    return kept;
  }
  const { monthsOnBook } = rule;
  if (monthsOnBook === null || here.get(monthsOnBook.column)?.kind === 'numeric') return { ...kept, rule };
  lost.push({ what: 'Months on book', why: `${monthsOnBook.column} holds no numbers ${words.here}.` });
  return { ...kept, rule: { ...rule, monthsOnBook: null } };
}

export function keepDeclined(
  declined: DraftContent['declined'],
  profile: ColumnProfile,
  words: LostWords,
  lost: Lost,
): DraftContent['declined'] {
  const { kept, gone } = sift({ values: declined?.values ?? [] }, profile);
  if (gone !== '') lost.push({ what: 'Declined', why: `${gone} ${words.gone}.` });
  return kept.values.length > 0 ? kept : null;
}

/** Where no column has the role of the partition there is nothing to split by but a seed. */
export const drawnBySeed: DraftContent['partition'] = { by: 'seed', seed: 1, holdOutShare: 0.3, outOfTime: null };
export const withPartition = (draft: DraftContent): DraftContent =>
  draft.partition.by === 'column' && !draft.columns.some(({ role }) => role === 'partition')
    ? { ...draft, partition: drawnBySeed }
    : draft;

export function keepParts(
  { development, holdOut, outOfTime }: Omit<ByColumn, 'by'>,
  profile: ColumnProfile,
  words: LostWords,
  lost: Lost,
): ByColumn {
  const { kept, gone } = sift({ development, holdOut, outOfTime }, profile);
  if (gone !== '') lost.push({ what: 'Partition', why: `${gone} ${words.gone}.` });
  return { by: 'column', ...kept };
}
