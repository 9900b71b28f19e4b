import { classBinning as classCharacteristicsOf, storeClassing } from '../../services/binnings/class-binning';
import { classBinningJob } from '../definitions/binnings';
import { handle } from '../handler';

/** Nothing is stored before the last characteristic is classed, so an attempt that ends early leaves nothing behind. */
export const classBinning = handle(classBinningJob, {
  async work({ binningId }, run) {
    const classed = await classCharacteristicsOf(binningId, run);
    await run.finish((tx) => storeClassing(tx, run.run, classed));
  },
});
