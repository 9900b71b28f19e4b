import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DraftContent } from '@tallystone/contracts/samples/definition';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import type { DataReading } from '@tallystone/contracts/specification/types';
import type { Sequelize } from 'sequelize';
import { Columns } from '../../replay/columns';
import type { SourceColumn } from '../../replay/source';
import { openSample } from '../../storage/columnStore';
import { thin } from '../../profiling/kind';

/** What rows of the file hold in a column of weights that is no weight. Counts are rows. */
export interface WeightFaults {
  readonly missing: number;
  readonly negative: number;
  /** Null without a negative one. */
  readonly smallest: number | null;
  readonly unreadable: number;
  /** Texts that are no numbers, the most frequent first, at most three. */
  readonly examples: readonly string[];
}

/**
 * Counts what is wrong with the weights of a draft, in every row of the file; null where nothing can be. A profile alone cannot tell: it has the
 * smallest value without its count, and leaves out what it takes for a special code, as -1 often is.
 */
export async function weightFaultsOf(
  sequelize: Sequelize,
  sample: { readonly id: string; readonly sha256: string; readonly reading: ReadingChoices | null; readonly rows: number | null },
  draft: DraftContent,
  profiles: readonly ColumnProfile[],
): Promise<WeightFaults | null> {
  const name = draft.columns.find(({ role }) => role === 'weight')?.column;
  const profile = profiles.find(({ column }) => column === name);
  if (!profile || profile.hashed || sample.reading === null || sample.rows === null || !isDoubtful(profile)) return null;
  const column = (await openSample(sequelize, sample.id, [profile.column])).column(profile.column);
  return column ? countFaults(profile.column, column, sample.rows, { sha256: sample.sha256, ...sample.reading }) : null;
}

/** Whether a row of this column may hold something else than a number of at least 0. */
const isDoubtful = ({ kind, missing, numeric, specialSuspects, flags }: ColumnProfile): boolean =>
  kind !== 'numeric' ||
  missing > 0 ||
  (numeric !== null && numeric.smallest < 0) ||
  specialSuspects.length > 0 ||
  flags.some(({ code }) => code === 'unreadable-numbers');

function countFaults(name: string, column: SourceColumn, rows: number, reading: DataReading): WeightFaults {
  const view = new Columns({ rows, column: () => column }, reading).numbers(name);
  if (!view) throw new Error(`Column ${name} cannot be read as numbers`);
  let [missing, negative, unreadable, smallest] = [0, 0, 0, 0];
  const texts = new Map<string, number>();
  for (let row = 0; row < rows; row++) {
    const weight = view.number(row);
    if (weight >= 0) continue;
    if (weight < 0) {
      negative++;
      smallest = Math.min(smallest, weight);
    } else if (view.missing(row)) missing++;
    else {
      unreadable++;
      const text = view.text(row);
      // Whatever stands there once per row is no example worth its memory.
      if (texts.has(text) || texts.size < 1000) texts.set(text, (texts.get(text) ?? 0) + 1);
    }
  }
  const examples = [...texts]
    .sort((a, b) => b[1] - a[1])
    .slice(0, 3)
    .map(([text]) => text);
  return { missing, negative, smallest: negative > 0 ? smallest : null, unreadable, examples };
}

/** What is wrong, a sentence for each fault with its count. */
export function weightSentences(column: string, faults: WeightFaults): { code: string; message: string }[] {
  const said: { code: string; message: string }[] = [];
  const rows = (count: number): string => `${thin(count)} ${count === 1 ? 'row' : 'rows'}`;
  if (faults.negative > 0)
    said.push({
      code: 'negative-weight',
      message: `${column} has weights below zero in ${rows(faults.negative)}, the smallest ${faults.smallest}. Weights are zero or more: mend them in the file, or give the role to another column.`,
    });
  if (faults.unreadable > 0)
    said.push({
      code: 'unreadable-weight',
      message: `${column} has weights that are no numbers in ${rows(faults.unreadable)}: ${faults.examples.map((text) => JSON.stringify(text)).join(', ')}. Mend them in the file, or read it with other choices.`,
    });
  if (faults.missing > 0)
    said.push({
      code: 'missing-weight',
      message: `${column} is missing in ${rows(faults.missing)}. Every row needs a weight; zero is allowed.`,
    });
  return said;
}
