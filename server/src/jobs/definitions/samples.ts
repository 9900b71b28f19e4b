import { DraftComparisonResult } from '@tallystone/contracts/samples/balance';
import { ConfirmationResult } from '@tallystone/contracts/samples/definition';
import { QualityResult } from '@tallystone/contracts/samples/quality';
import { ReadingChoices, ReadingResult } from '@tallystone/contracts/samples/reading';
import { z } from 'zod';
import { defineJob } from './job';

/** Reads a raw file under confirmed choices: types, profile, columns. */
export const readSampleJob = defineJob({
  kind: 'sample.read',
  queue: 'long',
  readsRows: true,
  payload: z.strictObject({ sampleId: z.uuid(), choices: ReadingChoices }),
  result: ReadingResult,
});

/** Compares the inputs of a draft between its partitions, before anything is confirmed. */
export const compareDraftJob = defineJob({
  kind: 'sample.compare',
  queue: 'long',
  readsRows: true,
  payload: z.strictObject({ sampleId: z.uuid(), revision: z.int() }),
  result: DraftComparisonResult,
});

/** Carries out a draft on all rows and keeps it as an immutable definition. */
export const confirmSampleJob = defineJob({
  kind: 'sample.confirm',
  queue: 'long',
  readsRows: true,
  payload: z.strictObject({ sampleId: z.uuid(), revision: z.int() }),
  result: ConfirmationResult,
});

/** Makes the quality report of a confirmed definition. */
export const reportQualityJob = defineJob({
  kind: 'sample.quality',
  queue: 'long',
  readsRows: true,
  payload: z.strictObject({ definitionId: z.uuid() }),
  result: QualityResult,
});
