import type { ColumnList, ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import type { FoundSample } from './find-sample';
import { thin } from '../../profiling/kind';

/** Profiles of the columns of a sample that has been read, in the order of the file. */
export async function profilesOf(
  sequelize: Sequelize,
  readingId: string,
  tx: Transaction | null = null,
): Promise<ColumnProfile[]> {
  const stored = await rows<{ profile: ColumnProfile }>(
    sequelize,
    'SELECT profile FROM sample_columns WHERE reading_id = $1 ORDER BY position',
    [readingId],
    tx,
  );
  return stored.map(({ profile }) => profile);
}

/** The quality table: empty until the file has been read. */
export async function listColumns(sequelize: Sequelize, sample: FoundSample): Promise<ColumnList> {
  const columns = sample.readingId === null ? [] : await profilesOf(sequelize, sample.readingId);
  const duplicateRows = sample.duplicateRows ?? 0;
  return { columns, rows: sample.rows ?? 0, duplicateRows, finding: qualityFinding(columns, sample.rows ?? 0, duplicateRows) };
}

/** One sentence that says what the columns say; where nothing stands out, the counts. */
export function qualityFinding(columns: readonly ColumnProfile[], count: number, duplicateRows: number): string {
  if (columns.length === 0) return 'The file has not been read yet.';
  const stopped = columns.filter(({ flags }) => flags.some(({ weight }) => weight === 'stop')).length;
  const looked = columns.filter(
    ({ flags }) => flags.some(({ weight }) => weight === 'look') && !flags.some(({ weight }) => weight === 'stop'),
  ).length;
  const parts: string[] = [];
  if (stopped > 0) parts.push(`${stopped} ${stopped === 1 ? 'is' : 'are'} set to not used or kept as hashes`);
  if (looked > 0) parts.push(`${looked} deserve${looked === 1 ? 's' : ''} a look`);
  if (duplicateRows > 0) parts.push(`${thin(duplicateRows)} row${duplicateRows === 1 ? ' repeats' : 's repeat'} an earlier one`);
  const whole = `${thin(count)} row${count === 1 ? '' : 's'} and ${columns.length} column${columns.length === 1 ? '' : 's'}`;
  return parts.length === 0 ? `${whole}; nothing stands out.` : `${whole}: ${parts.join(', ')}.`;
}
