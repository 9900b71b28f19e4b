import { z } from 'zod';
import { defineJob } from './job';

/** Fits a penalty path with cross-validation and evaluates every penalty. */
export const fitPathJob = defineJob({
  kind: 'fit.path',
  queue: 'long',
  readsRows: true,
  payload: z.strictObject({ fitId: z.uuid() }),
  result: z.object({ fitId: z.uuid(), penalties: z.int(), stoppedEarly: z.boolean() }),
});
