import { z } from 'zod';

export const NewErasure = z.strictObject({
  reason: z.string().trim().min(10, 'Say in a sentence why the rows are erased').max(2000),
  /** The name of the file, typed again: erasing cannot be undone. */
  fileName: z.string().min(1).max(1000),
});
export type NewErasure = z.infer<typeof NewErasure>;

/** The tombstone of a sample whose rows are gone: which it was, who erased them, when and why. */
export const Erasure = z.object({ sample: z.int(), fileName: z.string(), at: z.string(), by: z.string(), reason: z.string() });
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
  /** What rests on it. */
  definitions: z.int(),
  binnings: z.int(),
  fits: z.int(),
  /** Versions that can be replicated as long as the rows are there. */
  versions: z.int(),
  /** Runs queued or under way that read its rows: erasing ends them. */
  runs: z.int(),
  erased: Erasure.nullable(),
  abilities: z.array(z.enum(['erase'])),
});
export type KeptSample = z.infer<typeof KeptSample>;

/** A file on its way: what has arrived of it is kept as well, until it has arrived as a whole or is dropped. */
export const KeptUpload = z.object({ id: z.uuid(), fileName: z.string(), arrived: z.number(), size: z.number(), from: z.string(), seenAt: z.string() });
export type KeptUpload = z.infer<typeof KeptUpload>;

export const KeptSamples = z.object({ samples: z.array(KeptSample), uploads: z.array(KeptUpload) }).meta({ id: 'KeptSamples' });
export type KeptSamples = z.infer<typeof KeptSamples>;
