import { ClassingResult, CorrelationResult } from '@tallystone/contracts/binnings/schema';
import { z } from 'zod';
import { defineJob } from './job';

/** Classes every characteristic of a binning automatically. */
export const classBinningJob = defineJob({
  kind: 'binning.class',
  queue: 'long',
  payload: z.strictObject({ binningId: z.uuid() }),
  result: ClassingResult,
});

/** Correlates the characteristics of a binning by the WOE of their development rows. */
export const correlateBinningJob = defineJob({
  kind: 'binning.correlate',
  queue: 'long',
  payload: z.strictObject({ binningId: z.uuid() }),
  result: CorrelationResult,
});
