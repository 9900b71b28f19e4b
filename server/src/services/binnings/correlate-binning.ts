import type { Bins, Fine } from '@tallystone/contracts/binnings/bins';
import type { BinnedCharacteristic } from '@tallystone/contracts/specification/types';
import { readBench } from '@tallystone/numeric/bench';
import type { Sequelize, Transaction } from 'sequelize';
import { binsOfEntry } from '../../classing/definition';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { correlateBinningJob } from '../../jobs/definitions/binnings';
import type { RunContext } from '../../jobs/handler';
import { startRun } from '../../jobs/start-run';
import { Binning } from '../../models/binning';
import { runInThread } from '../../threads/run-in-thread';
import { loadPrepared } from '../samples/definitions';
import { shared } from './class-characteristics';
import { loadCodes } from './load-codes';

/** A characteristic of a matrix with the bins it had then. */
export interface CorrelatedBins {
  readonly id: string;
  readonly bins: Bins;
}

export interface FoundCorrelations {
  readonly characteristics: readonly CorrelatedBins[];
  readonly matrix: readonly (readonly (number | null)[])[];
  readonly rows: number;
}

/** Starts the run, or gives the one that is under way for this binning. */
export async function startCorrelation(
  context: Pick<Context, 'sequelize' | 'boss'>,
  tx: Transaction,
  asked: { binningId: string; person: { readonly id: string }; modelId: string; requestId?: string },
): Promise<string> {
  const { binningId, person, modelId, requestId } = asked;
  const run = await startRun(context, tx, correlateBinningJob, {
    payload: { binningId },
    person,
    modelId,
    entity: 'binning',
    entityId: binningId,
    rowsOf: { binningId },
    singleton: binningId,
    requestId,
  });
  return run.id;
}

/**
 * Correlates every characteristic of a binning that has more than one bin, left out ones too: whoever takes one in again need not wait. Rows are
 * those of development with a known outcome; each counts with its WOE in the bins as they are.
 */
export async function correlateBinning(
  binningId: string,
  { context: { sequelize }, signal, progress }: Pick<RunContext<unknown>, 'context' | 'signal' | 'progress'>,
): Promise<FoundCorrelations> {
  progress('Reading the characteristics', null);
  const binning = await Binning.findByPk(binningId, { rejectOnEmpty: true });
  const all = await rows<{ id: string; definition: BinnedCharacteristic; fine: Fine; bins: number }>(
    sequelize,
    `SELECT id, definition, fine, (summary ->> 'bins')::int AS bins FROM binning_characteristics WHERE binning_id = $1 ORDER BY position`,
    [binningId],
  );
  const telling = all.filter(({ bins }) => bins > 1);
  if (telling.length === 0) return { characteristics: [], matrix: [], rows: 0 };
  const coded = await loadCodes(
    sequelize,
    binningId,
    telling.map(({ definition }) => definition),
  );
  signal.throwIfAborted();
  progress('Correlating', null);
  const bins = telling.map(({ definition }) => binsOfEntry(definition));
  const columns = coded.characteristics.map(({ codes }, index) => {
    const { fine, definition } = telling[index];
    const reading = readBench(fine, binsOfEntry(definition, fine.pooled));
    return {
      codes: codes ?? new Uint8Array(coded.rows),
      values: reading.bins.map(({ figures }) => figures.development?.woe ?? 0),
    };
  });
  const counted = shared(await loadPrepared(sequelize, binning.definitionId));
  const { matrix, rows: count } = await runInThread('binning.correlate', { columns, counted }, { signal });
  const size = telling.length;
  return {
    characteristics: telling.map(({ id }, index) => ({ id, bins: bins[index] })),
    matrix: Array.from({ length: size }, (_, j) =>
      Array.from(matrix.subarray(j * size, (j + 1) * size), (value) => (Number.isNaN(value) ? null : value)),
    ),
    rows: count,
  };
}

export async function storeCorrelations(
  sequelize: Sequelize,
  tx: Transaction,
  binningId: string,
  { characteristics, matrix, rows: count }: FoundCorrelations,
): Promise<{ binningId: string; characteristics: number }> {
  await rows(
    sequelize,
    `INSERT INTO binning_correlations (binning_id, characteristics, matrix, rows) VALUES ($1, $2::jsonb, $3::jsonb, $4)
     ON CONFLICT (binning_id) DO UPDATE SET characteristics = excluded.characteristics, matrix = excluded.matrix, rows = excluded.rows,
       made_at = now()
     RETURNING binning_id`,
    [binningId, JSON.stringify(characteristics), JSON.stringify(matrix), count],
    tx,
  );
  return { binningId, characteristics: characteristics.length };
}
