import { ClassingResult, CompletionResult, CorrelationResult, Reclass, ReclassingResult } from '@tallystone/contracts/binnings/schema';
import { z } from 'zod';
import { defineJob } from './job';

/** Classes every characteristic of a binning automatically. */
export const classBinningJob = defineJob({
  kind: 'binning.class',
  queue: 'long',
  readsRows: true,
  payload: z.strictObject({ binningId: z.uuid() }),
  result: ClassingResult,
});

/** Correlates the characteristics of a binning by the WOE of their development rows. */
export const correlateBinningJob = defineJob({
  kind: 'binning.correlate',
  queue: 'long',
  readsRows: true,
  payload: z.strictObject({ binningId: z.uuid() }),
  result: CorrelationResult,
});

/** Calculates what a binning lacks that was classed before some of its figures were introduced. */
export const completeBinningJob = defineJob({
  kind: 'binning.complete',
  queue: 'long',
  readsRows: true,
  payload: z.strictObject({ binningId: z.uuid() }),
  result: CompletionResult,
});

/** Classes chosen characteristics of a binning anew, from their fine classes. */
export const reclassBinningJob = defineJob({
  kind: 'binning.reclass',
  queue: 'long',
  payload: Reclass.extend({ binningId: z.uuid() }),
  result: ReclassingResult,
});
