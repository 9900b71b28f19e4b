import type { Erasure } from '@tallystone/contracts/samples/erasure';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../database/sql';
import { rowsErased } from '../problems/rows-erased';

/**
 * SQL of the tombstone of a sample as an `Erasure`, or null while its rows are there.
 *
 * @param sampleId an SQL expression, as in `d.sample_id`
 * @example
 * `SELECT b.id, ${tombstoneOf('d.sample_id')} AS erased FROM binnings b JOIN sample_definitions d ON d.id = b.definition_id`
 */
export const tombstoneOf = (sampleId: string): string => `(
  SELECT jsonb_build_object('sample', tomb_sample.number, 'fileName', tomb_sample.file_name,
           'at', to_char(tomb.erased_at AT TIME ZONE 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"'), 'by', tomb_person.name, 'reason', tomb.reason)
    FROM sample_erasures tomb JOIN samples tomb_sample ON tomb_sample.id = tomb.sample_id JOIN people tomb_person ON tomb_person.id = tomb.erased_by
   WHERE tomb.sample_id = ${sampleId})`;

/** A sample, by itself or by one of what is kept of it or was built on it. */
export type RowsPlace =
  | { readonly sampleId: string }
  | { readonly readingId: string }
  | { readonly definitionId: string }
  | { readonly rawFileId: string }
  | { readonly binningId: string };

const sampleOf: Readonly<Record<string, string>> = {
  sampleId: '$1::uuid',
  readingId: 'SELECT sample_id FROM sample_readings WHERE id = $1',
  definitionId: 'SELECT sample_id FROM sample_definitions WHERE id = $1',
  rawFileId: 'SELECT id FROM samples WHERE raw_file_id = $1',
  binningId: 'SELECT d.sample_id FROM binnings b JOIN sample_definitions d ON d.id = b.definition_id WHERE b.id = $1',
};

/**
 * Refuses where the rows of a sample are gone. A statement sees all of an erasure or nothing of it, so a reader asks when it has found less
 * than there should be: nothing can come between the two.
 *
 * @throws Problem 409 `rows-erased`
 * @example
 * if (column.codes.length !== count) await refuseErased(sequelize, { readingId });
 */
export async function refuseErased(sequelize: Sequelize, place: RowsPlace, tx: Transaction | null = null): Promise<void> {
  const [[kind, id]] = Object.entries<string>(place);
  const [found] = await rows<{ erased: Erasure | null }>(
    sequelize,
    `SELECT ${tombstoneOf('s.id')} AS erased FROM samples s WHERE s.id = (${sampleOf[kind]})`,
    [id],
    tx,
  );
  if (found?.erased) throw rowsErased(found.erased);
}

/**
 * Holds a sample against being erased until the transaction ends: for whoever starts what will read its rows. An erasure that came first is
 * waited for.
 *
 * @returns the sample's id
 * @throws Problem 409 `rows-erased`
 */
export async function holdRows(sequelize: Sequelize, tx: Transaction, place: RowsPlace): Promise<string> {
  const [[kind, id]] = Object.entries<string>(place);
  const [held] = await rows<{ id: string }>(sequelize, `SELECT id FROM samples WHERE id = (${sampleOf[kind]}) FOR KEY SHARE`, [id], tx);
  if (!held) throw new Error(`There is no sample of ${kind} ${id}`);
  await refuseErased(sequelize, { sampleId: held.id }, tx);
  return held.id;
}
