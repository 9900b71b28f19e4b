import { z } from 'zod';
import { recordEvent } from '../record/event';
import { ReplicationMethod } from './schema';

export const validationEvents = [
  recordEvent('version.replicated', 'version', {
    detail: z.strictObject({
      version: z.int(),
      method: ReplicationMethod,
      matches: z.boolean(),
      compared: z.int(),
      differing: z.int(),
      evidence: z.int(),
      evidenceSha256: z.string(),
    }),
  }),
  recordEvent('version.stability-studied', 'version', {
    detail: z.strictObject({ version: z.int(), resamples: z.int(), seed: z.int(), evidence: z.int(), evidenceSha256: z.string() }),
  }),
] as const;
