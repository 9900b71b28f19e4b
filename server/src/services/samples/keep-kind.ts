import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn, SpecialCode } from '@tallystone/contracts/samples/definition';
import { canBe } from '@tallystone/contracts/samples/kinds';
import type { ColumnKind } from '@tallystone/contracts/samples/reading';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';

/** What reading took each column for, by its heading: beside it, what a draft says is somebody's choice. */
export type ReadKinds = Readonly<Record<string, ColumnKind>>;

/** What the reading that a sample points at takes its columns for; empty before the first. */
export async function readKindsOf(sequelize: Sequelize, tx: Transaction, sampleId: string): Promise<ReadKinds> {
  const found = await rows<{ name: string; kind: ColumnKind }>(
    sequelize,
    'SELECT c.name, c.kind FROM sample_columns c JOIN samples s ON s.reading_id = c.reading_id WHERE s.id = $1',
    [sampleId],
    tx,
  );
  return Object.fromEntries(found.map(({ name, kind }) => [name, kind]));
}

/**
 * The kind that a column keeps in another file, or in another reading of its own. What somebody chose stays wherever it can be chosen there. A column
 * that was texts because it was read as texts is numbers once it is read as numbers.
 *
 * @param readAs what reading took it for where its kind was settled; undefined where that is not known
 * @returns null where it can keep none
 */
export function keptKind(column: DefinedColumn, readAs: ColumnKind | undefined, profile: ColumnProfile): ColumnKind | null {
  if (column.kind === 'categorical' && readAs === 'categorical' && profile.kind !== 'categorical')
    return profile.kind === 'numeric' && column.role !== 'not used' ? 'numeric' : null;
  return canBe(column.kind, profile) ? column.kind : null;
}

/** The special codes of texts that are numbers now, and whether some are no numbers and were left out. */
export function codesOfNumbers(special: readonly SpecialCode[]): { special: SpecialCode[]; someLost: boolean } {
  const asNumber = (value: string | number): number[] => {
    const number = typeof value === 'number' ? value : /^[+-]?\d+(\.\d+)?$/.test(value.trim()) ? Number(value) : NaN;
    return Number.isNaN(number) ? [] : [number];
  };
  const kept = special
    .map(({ label, values }) => ({ label, values: values.flatMap(asNumber) }))
    .filter(({ values }) => values.length > 0);
  const count = (codes: readonly SpecialCode[]): number => codes.reduce((sum, { values }) => sum + values.length, 0);
  return { special: kept, someLost: count(kept) < count(special) };
}
