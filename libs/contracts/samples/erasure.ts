import { z } from 'zod';

export const NewErasure = z.strictObject({
  reason: z.string().trim().min(10, 'Say in a sentence why the rows are erased').max(2000),
});
export type NewErasure = z.infer<typeof NewErasure>;

/** What stays of a sample whose rows are gone: that they were there, who erased them, when and why. */
export const Erasure = z.object({ at: z.string(), by: z.string(), reason: z.string() });
export type Erasure = z.infer<typeof Erasure>;

/** What is kept of applicants in one model: metadata alone, no value of any row. */
export const KeptSample = z.object({
  id: z.uuid(),
  number: z.int(),
  fileName: z.string(),
  size: z.number(),
  sha256: z.string(),
  rows: z.int().nullable(),
  receivedAt: z.string(),
  receivedFrom: z.string(),
  definitions: z.int(),
  /** Versions that can be replicated as long as the rows are there. */
  versions: z.int(),
  erased: Erasure.nullable(),
  abilities: z.array(z.enum(['erase'])),
});
export type KeptSample = z.infer<typeof KeptSample>;
export const KeptSamples = z.object({ samples: z.array(KeptSample) }).meta({ id: 'KeptSamples' });
export type KeptSamples = z.infer<typeof KeptSamples>;
