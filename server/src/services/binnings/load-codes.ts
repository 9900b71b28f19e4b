import { deflateRawSync, inflateRawSync } from 'node:zlib';
import type { Bins } from '@tallystone/contracts/binnings/bins';
import type { BinnedCharacteristic } from '@tallystone/contracts/specification/types';
import canonicalize from 'canonicalize';
import type { Sequelize, Transaction } from 'sequelize';
import { binsOfEntry } from '../../classing/definition';
import { rows } from '../../database/sql';
import { binsOf } from '../../replay/bins';
import { codeCharacteristics } from '../../replay/coding';
import type { CodedCharacteristic, CodeMatrix } from '../../replay/types';
import { openSample } from '../../storage/columnStore';
import { findDefinition, loadPrepared } from '../samples/definitions';
import { binningCharacteristics } from './characteristics-of';

interface Kept {
  readonly id: string;
  readonly column: string;
  readonly revision: number;
  readonly bins: Bins | null;
  readonly codes: Buffer | null;
}

/**
 * The code matrix of a binning, as the chain gives it. Codes of bins that have been coded before come from their cache; a column is read only
 * where its bins are new.
 *
 * @param entries which characteristics, with the bins they had (a fit keeps its own); the ones included now when left out
 * @example
 * const matrix = await loadCodes(sequelize, fit.binningId, specification.characteristics.filter(isBinned));
 */
export async function loadCodes(
  sequelize: Sequelize,
  binningId: string,
  entries?: readonly BinnedCharacteristic[],
  tx: Transaction | null = null,
): Promise<CodeMatrix> {
  const [binning] = await rows<{ definitionId: string }>(
    sequelize,
    'SELECT definition_id AS "definitionId" FROM binnings WHERE id = $1',
    [binningId],
    tx,
  );
  const definition = binning && (await findDefinition(sequelize, binning.definitionId, tx));
  if (!definition) throw new Error(`There is no binning ${binningId}`);
  const wanted = entries ?? (await binningCharacteristics(sequelize, binningId, tx)).map((one) => one.definition);
  const kept = new Map(
    (
      await rows<Kept>(
        sequelize,
        `SELECT c.id, c.column_name AS "column", c.revision, k.bins, k.codes
           FROM binning_characteristics c LEFT JOIN binning_codes k ON k.characteristic_id = c.id WHERE c.binning_id = $1`,
        [binningId],
        tx,
      )
    ).map((row) => [row.column, row]),
  );
  let prepared: Awaited<ReturnType<typeof loadPrepared>> | null = null;
  const characteristics: CodedCharacteristic[] = [];
  for (const entry of wanted) {
    const bins = binsOfEntry(entry);
    const known = kept.get(entry.column);
    if (known?.codes && canonicalize(known.bins) === canonicalize(bins)) {
      const codes = new Uint8Array(inflateRawSync(known.codes));
      characteristics.push({ characteristic: entry, bins: binsOf(entry), codes, values: null });
      continue;
    }
    prepared ??= await loadPrepared(sequelize, definition.id);
    const source = await openSample(sequelize, definition.sampleId, [entry.column]);
    const [coded] = codeCharacteristics(
      { data: definition.content.data, characteristics: [entry] },
      source,
      prepared,
    ).characteristics;
    characteristics.push(coded);
    if (known && coded.codes) await keep(sequelize, known, bins, coded.codes, tx);
  }
  return { rows: definition.rows, characteristics };
}

async function keep(
  sequelize: Sequelize,
  { id, revision }: Kept,
  bins: Bins,
  codes: Uint8Array,
  tx: Transaction | null,
): Promise<void> {
  await rows(
    sequelize,
    `INSERT INTO binning_codes (characteristic_id, revision, bins, codes) VALUES ($1, $2, $3::jsonb, $4)
     ON CONFLICT (characteristic_id) DO UPDATE SET revision = excluded.revision, bins = excluded.bins, codes = excluded.codes
     RETURNING characteristic_id`,
    [id, revision, JSON.stringify(bins), deflateRawSync(codes, { level: 1 })],
    tx,
  );
}
