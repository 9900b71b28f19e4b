import { classBinning as classCharacteristicsOf, storeClassing } from '../../services/binnings/class-binning';
import {
  correlateBinning as correlateCharacteristicsOf,
  startCorrelation,
  storeCorrelations,
} from '../../services/binnings/correlate-binning';
import { completeBinning as completeCharacteristicsOf } from '../../services/binnings/complete-binning';
import { reclassInRun } from '../../services/binnings/reclass';
import { classBinningJob, completeBinningJob, correlateBinningJob, reclassBinningJob } from '../definitions/binnings';
import { handle } from '../handler';

/** Nothing is stored before the last characteristic is classed, so an attempt that ends early leaves nothing behind. */
export const classBinning = handle(classBinningJob, {
  async work({ binningId }, run) {
    const classed = await classCharacteristicsOf(binningId, run);
    await run.finish(async (tx) => {
      const result = await storeClassing(run.context.sequelize, tx, run.run, classed);
      // Nobody waits for these, so they are a run of their own.
      await startCorrelation(run.context, tx, { binningId, person: { id: run.run.personId }, modelId: classed.binning.modelId });
      return result;
    });
  },
});

export const correlateBinning = handle(correlateBinningJob, {
  async work({ binningId }, run) {
    const found = await correlateCharacteristicsOf(binningId, run);
    await run.finish((tx) => storeCorrelations(run.context.sequelize, tx, binningId, found));
  },
});

export const completeBinning = handle(completeBinningJob, {
  async work({ binningId }, run) {
    const result = await completeCharacteristicsOf(binningId, run);
    await run.finish(() => Promise.resolve(result));
  },
});

export const reclassBinning = handle(reclassBinningJob, { work: reclassInRun });
