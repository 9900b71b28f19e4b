import type { Sequelize, Transaction } from 'sequelize';
import { readBytes } from '../database/read-bytes';
import { rows } from '../database/sql';
import type { ColumnSource, TextColumn } from '../replay/source';
import { refuseErased } from './erasure';
import { joinStored } from './joinStored';
import { type TextSegment, encodeSegment } from './segmentCoding';

/** Values per segment of a column: 2 bytes tell any of them apart. */
export const segmentRows = 65_536;

/** Columns of one segment are written together; a statement takes at most this many of them (PostgreSQL: 65,535 parameters). */
const columnsPerStatement = 50;

/** Stores one segment of every column. `segment` counts from 0. */
export function storeSegment(
  sequelize: Sequelize,
  readingId: string,
  segment: number,
  columns: readonly { readonly position: number; readonly values: TextSegment }[],
  tx: Transaction | null = null,
): Promise<void> {
  const contents = columns.map(({ position, values }) => ({
    position,
    rows: values.codes.length,
    content: encodeSegment(values),
  }));
  return storeContents(sequelize, readingId, segment, contents, tx);
}

/** Stores one segment of every column that has been coded already, in whichever form. */
export async function storeContents(
  sequelize: Sequelize,
  readingId: string,
  segment: number,
  columns: readonly { readonly position: number; readonly rows: number; readonly content: Buffer }[],
  tx: Transaction | null = null,
): Promise<void> {
  for (let from = 0; from < columns.length; from += columnsPerStatement) {
    const part = columns.slice(from, from + columnsPerStatement);
    const values: unknown[] = [readingId, segment];
    const tuples = part.map((column) => {
      values.push(column.position, column.rows, column.content);
      return `($1::uuid, $${values.length - 2}::int, $2::int, $${values.length - 1}::int, $${values.length}::bytea)`;
    });
    await sequelize.query(
      `INSERT INTO column_segments (reading_id, position, segment, rows, content) VALUES ${tuples.join(', ')}`,
      {
        bind: values,
        transaction: tx,
      },
    );
  }
}

/** One segment of one column, coded. */
export interface ColumnContent {
  readonly rows: number;
  readonly content: Uint8Array;
}

/** Puts other segments in place of those of one column, in order. What stood there is gone with the transaction. */
export async function replaceColumn(
  sequelize: Sequelize,
  tx: Transaction,
  readingId: string,
  position: number,
  contents: readonly ColumnContent[],
): Promise<void> {
  await sequelize.query('DELETE FROM column_segments WHERE reading_id = $1 AND position = $2', {
    bind: [readingId, position],
    transaction: tx,
  });
  for (const [segment, { rows: count, content }] of contents.entries()) {
    const bytes = Buffer.from(content.buffer, content.byteOffset, content.byteLength);
    await storeContents(sequelize, readingId, segment, [{ position, rows: count, content: bytes }], tx);
  }
}

/**
 * One column as it is stored: its segments in order.
 *
 * @throws Problem 409 where the rows of its sample were erased
 */
export async function readContents(sequelize: Sequelize, readingId: string, position: number): Promise<Uint8Array<ArrayBuffer>[]> {
  const contents = await readBytes(sequelize, {
    text: 'SELECT content FROM column_segments WHERE reading_id = $1 AND position = $2 ORDER BY segment',
    values: [readingId, position],
  });
  if (contents.length === 0) await refuseErased(sequelize, { readingId });
  return contents;
}

/**
 * One whole column in memory, with one dictionary over all its segments.
 *
 * @throws Problem 409 where the rows of its sample were erased
 */
export async function readStoredColumn(
  sequelize: Sequelize,
  readingId: string,
  position: number,
  count: number,
): Promise<TextColumn> {
  const column = joinStored(await readContents(sequelize, readingId, position));
  if (column.codes.length !== count)
    throw new Error(`Column ${position} of reading ${readingId} has ${column.codes.length} of ${count} rows`);
  return column;
}

/** Where the columns of a sample that has been read are stored. */
export interface StoredSample {
  readonly readingId: string;
  readonly rows: number;
  readonly positions: ReadonlyMap<string, number>;
}

/** @throws Problem 409 where its rows were erased; an error when there is no such sample or it has not been read */
export async function findStored(sequelize: Sequelize, sampleId: string): Promise<StoredSample> {
  const [sample] = await rows<{ readingId: string | null; rows: number }>(
    sequelize,
    'SELECT reading_id AS "readingId", rows FROM samples WHERE id = $1',
    [sampleId],
  );
  if (!sample?.readingId) throw new Error(`Sample ${sampleId} has not been read`);
  // Whoever asks for no column of it would be told nothing.
  await refuseErased(sequelize, { sampleId });
  const stored = await rows<{ position: number; name: string }>(
    sequelize,
    'SELECT position, name FROM sample_columns WHERE reading_id = $1 ORDER BY position',
    [sample.readingId],
  );
  return {
    readingId: sample.readingId,
    rows: sample.rows,
    positions: new Map(stored.map(({ name, position }) => [name, position])),
  };
}

/**
 * The columns of a sample that has been read, as the chain takes them. Names what is needed: each column stays in memory as long as the
 * source does. A name that the sample does not have gives no column.
 *
 * @throws Problem 409 where its rows were erased; an error when there is no such sample or it has not been read
 * @example
 * const source = await openSample(sequelize, sampleId, ['bad', 'age']);
 * const prepared = prepare(specification, source);
 */
export async function openSample(sequelize: Sequelize, sampleId: string, names: Iterable<string>): Promise<ColumnSource> {
  const { readingId, rows: count, positions } = await findStored(sequelize, sampleId);
  const wanted = new Set(names);
  const columns = new Map<string, TextColumn>();
  for (const [name, position] of positions) {
    if (wanted.has(name)) columns.set(name, await readStoredColumn(sequelize, readingId, position, count));
  }
  return { rows: count, column: (name) => columns.get(name) };
}
