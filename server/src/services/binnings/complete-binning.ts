import type { Sequelize } from 'sequelize';
import { summarise } from '../../classing/automatic';
import { binsOfEntry } from '../../classing/definition';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { inTransaction } from '../../database/transaction';
import { completeBinningJob } from '../../jobs/definitions/binnings';
import type { RunContext } from '../../jobs/handler';
import { startRun } from '../../jobs/start-run';
import { Binning, BinningCharacteristic } from '../../models/binning';
import { findOnBench } from './find-characteristic';
import { countMonthsOf, openMonths, storeMonths } from './months';

/**
 * Binnings that were classed before a figure was introduced lack it: the first who reads one starts a run that calculates what is missing. Bins,
 * edits and revisions stay as they are, so that nothing that was fitted becomes stale.
 */

const lacking = `FROM binning_characteristics c WHERE c.binning_id = $1
  AND (c.summary -> 'monthlyDrift' IS NULL OR NOT EXISTS (SELECT 1 FROM binning_months m WHERE m.characteristic_id = c.id))`;

/** Starts the run where something is missing; a run that failed is not tried again by every reader. */
export async function completeIfOld(
  context: Pick<Context, 'sequelize' | 'boss'>,
  asked: { binningId: string; modelId: string; person: { readonly id: string }; requestId?: string },
): Promise<void> {
  const { binningId, modelId, person, requestId } = asked;
  const [{ wanted }] = await rows<{ wanted: boolean }>(
    context.sequelize,
    `SELECT EXISTS (SELECT 1 ${lacking})
        AND NOT EXISTS (SELECT 1 FROM runs WHERE kind = 'binning.complete' AND singleton = $1::text AND state = 'failed') AS wanted`,
    [binningId],
  );
  if (!wanted) return;
  await inTransaction(context.sequelize, (tx) =>
    startRun(context, tx, completeBinningJob, {
      payload: { binningId },
      person,
      modelId,
      entity: 'binning',
      entityId: binningId,
      rowsOf: { binningId },
      singleton: binningId,
      requestId,
    }),
  );
}

/** Calculates what is missing, one characteristic after the other; each is kept as soon as it is there. */
export async function completeBinning(
  binningId: string,
  { context: { sequelize }, signal, progress, write }: Pick<RunContext<unknown>, 'context' | 'signal' | 'progress' | 'write'>,
): Promise<{ binningId: string; characteristics: number }> {
  progress('Reading the sample', null);
  const binning = await Binning.findByPk(binningId, { rejectOnEmpty: true });
  const ids = (await rows<{ id: string }>(sequelize, `SELECT c.id ${lacking} ORDER BY c.position`, [binningId])).map(
    ({ id }) => id,
  );
  const source = await openMonths(sequelize, binning.definitionId);
  for (const [index, id] of ids.entries()) {
    signal.throwIfAborted();
    progress('Completing characteristics', index / ids.length);
    await completeOne(sequelize, write, binningId, id, source);
  }
  return { binningId, characteristics: ids.length };
}

async function completeOne(
  sequelize: Sequelize,
  write: RunContext<unknown>['write'],
  binningId: string,
  id: string,
  source: Awaited<ReturnType<typeof openMonths>>,
): Promise<void> {
  for (;;) {
    const read = await findOnBench(sequelize, binningId, id);
    if (!read) return;
    const months = await countMonthsOf(sequelize, source, read.characteristic);
    const done = await write(async (tx) => {
      const now = await findOnBench(sequelize, binningId, id, tx, true);
      if (!now) return true;
      const { fine, outOfTime, definition, constraints } = now.characteristic;
      // Somebody split a fine class meanwhile: what was counted is of other slots.
      if (fine.edges.length !== read.characteristic.fine.edges.length) return false;
      await storeMonths(sequelize, tx, id, months);
      await BinningCharacteristic.update(
        summarise({ fine, outOfTime, months: months?.counts ?? null }, binsOfEntry(definition, fine.pooled), constraints),
        { where: { id }, transaction: tx },
      );
      return true;
    });
    if (done) return;
  }
}
