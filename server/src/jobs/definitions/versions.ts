import { FreezeResult } from '@tallystone/contracts/versions/schema';
import { NewStability, ReplicationMethod } from '@tallystone/contracts/validation/schema';
import { z } from 'zod';
import { defineJob } from './job';

export const freezeVersionJob = defineJob({
  kind: 'version.freeze',
  queue: 'long',
  readsRows: true,
  payload: z.strictObject({ fitId: z.uuid(), choiceId: z.uuid(), note: z.string() }),
  result: FreezeResult,
});

export const replicateVersionJob = defineJob({
  kind: 'version.replicate',
  queue: 'long',
  readsRows: true,
  payload: z.strictObject({ versionId: z.uuid(), method: ReplicationMethod }),
  result: z.object({ versionId: z.uuid(), evidenceId: z.uuid(), matches: z.boolean() }),
});

export const studyStabilityJob = defineJob({
  kind: 'version.stability',
  queue: 'long',
  readsRows: true,
  payload: z.strictObject({ versionId: z.uuid(), ...NewStability.shape }),
  result: z.object({ versionId: z.uuid(), evidenceId: z.uuid() }),
});
