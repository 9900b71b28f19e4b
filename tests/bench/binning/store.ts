import { randomUUID } from 'node:crypto';
import { Generator } from '@tallystone/numeric/random/generator';
import { Client } from 'pg';
import type { Sequelize } from 'sequelize';
import type { CountedRows } from '../../../server/src/classing/fine-classes';
import { segmentRows, storeSegment } from '../../../server/src/storage/columnStore';

export interface StoredSample {
  readonly sampleId: string;
  readonly columns: readonly { readonly column: string; readonly kind: 'numeric' | 'categorical'; readonly special: [] }[];
  readonly counted: CountedRows;
}

/** Different values of the columns, in turn: shares in thousandths, years, amounts of nearly every value, kinds. */
export const forms = [1000, 70, 60_000, 12] as const;

/** The value at a place among so many different ones. */
export const valueOf = (different: number, place: number): string =>
  different === 1000 ? String(place / 1000) : different === 12 ? `kind ${place}` : String(place);

/**
 * An invented sample written straight into the column store of a fresh database: three in four columns are numbers, of 70 to 60,000 different values, the
 * others categories; some are missing; risk hangs on the first.
 */
export async function storeSample(sequelize: Sequelize, ownerUrl: string, rows: number, count: number): Promise<StoredSample> {
  const [sampleId, readingId] = [randomUUID(), randomUUID()];
  const owner = new Client({ connectionString: ownerUrl });
  await owner.connect();
  // The store is filled without the person, the model and the raw file that a sample of the product hangs on.
  for (const key of ['samples_model_id_fkey', 'samples_raw_file_id_fkey', 'samples_received_by_fkey'])
    await owner.query(`ALTER TABLE samples DROP CONSTRAINT ${key}`);
  await owner.query(
    `INSERT INTO samples (id, model_id, number, raw_file_id, file_name, size, sha256, reading_id, rows, columns, received_by)
     VALUES ($1, $1, 1, $1, 'invented.csv', 0, '', $2, $3, $4, $1)`,
    [sampleId, readingId, rows, count],
  );
  await owner.query('INSERT INTO sample_readings (id, sample_id, run_id, attempt) VALUES ($1, $2, $2, 1)', [readingId, sampleId]);
  const columns = Array.from({ length: count }, (_, j) => ({
    column: `column_${j}`,
    kind: forms[j % forms.length] === 12 ? ('categorical' as const) : ('numeric' as const),
    special: [] as [],
  }));
  for (const [position, { column, kind }] of columns.entries()) {
    await owner.query(
      `INSERT INTO sample_columns (reading_id, position, name, kind, hashed, profile) VALUES ($1, $2, $3, $4, false, '{}')`,
      [readingId, position, column, kind],
    );
  }
  await owner.end();
  const random = new Generator(7);
  const partition = new Uint8Array(rows);
  const outcome = new Uint8Array(rows);
  const risk = new Float64Array(rows);
  for (let row = 0; row < rows; row++) {
    risk[row] = random.uniform();
    const draw = random.uniform();
    partition[row] = draw < 0.6 ? 1 : draw < 0.85 ? 2 : 3;
    outcome[row] = random.uniform() < 1 / (1 + Math.exp(-(2.2 - 1.6 * risk[row]))) ? 1 : 0;
  }
  for (const [position] of columns.entries()) {
    const different = forms[position % forms.length];
    for (let from = 0, segment = 0; from < rows; from += segmentRows, segment++) {
      const size = Math.min(segmentRows, rows - from);
      const places = new Map<string, number>();
      const codes = new Uint32Array(size);
      for (let i = 0; i < size; i++) {
        const mixed = random.uniform() < 0.4 ? risk[from + i] : random.uniform();
        const value = random.uniform() < 0.03 ? '' : valueOf(different, Math.floor(mixed * different));
        let place = places.get(value);
        if (place === undefined) places.set(value, (place = places.size));
        codes[i] = place;
      }
      await storeSegment(sequelize, readingId, segment, [{ position, values: { codes, texts: [...places.keys()] } }]);
    }
  }
  return { sampleId, columns, counted: { rows, partition, outcome, weights: null } };
}
