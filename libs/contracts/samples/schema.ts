import { z } from 'zod';
import { ProblemItem } from '../problems/schema';
import { sampleAbilities } from './abilities';
import { Erasure } from './erasure';
import { ReadingChoices } from './reading';

/** Limits of one file. What is over them is refused with what was found. */
export const fileLimits = { bytes: 1024 ** 3, rows: 1_000_000, columns: 200 } as const;

/**
 * received: the file is here, complete, and waits for its reading choices; reading: a run reads it; ready: read, typed, profiled and stored by
 * column. A file that has not arrived as a whole is an upload, never a sample.
 */
export const sampleStates = ['received', 'reading', 'ready'] as const;
export const SampleState = z.enum(sampleStates);
export type SampleState = z.infer<typeof SampleState>;

const summary = {
  id: z.uuid(),
  modelId: z.uuid(),
  /** 1, 2, ... within the model. */
  number: z.int(),
  fileName: z.string(),
  /** Bytes of the file as it was sent. */
  size: z.number(),
  /** Of the whole file, lower-case hexadecimal. */
  sha256: z.string(),
  state: SampleState,
  /** Data records and columns; null until read. */
  rows: z.int().nullable(),
  columns: z.int().nullable(),
  /** How many definitions were confirmed. */
  definitions: z.int(),
  latestDefinitionId: z.uuid().nullable(),
  /** The run that reads or confirms now. */
  runId: z.uuid().nullable(),
  receivedAt: z.string(),
  receivedFrom: z.string(),
  /** Who erased its rows, when and why; null while they are there. */
  erased: Erasure.nullable(),
};
export const SampleSummary = z.object(summary).meta({ id: 'SampleSummary' });
export type SampleSummary = z.infer<typeof SampleSummary>;

export const Sample = z
  .object({
    ...summary,
    /** The choices it was, or is being, read with; null until confirmed. */
    reading: ReadingChoices.nullable(),
    /** Why the last reading was refused: every problem of the file at once. */
    problems: z.array(ProblemItem),
    abilities: z.array(z.enum(sampleAbilities)),
  })
  .meta({ id: 'Sample' });
export type Sample = z.infer<typeof Sample>;

/** A file on its way: can be taken up again from `offset` (tus), by whoever began it. */
export const UploadSummary = z
  .object({ id: z.uuid(), fileName: z.string(), size: z.number(), offset: z.number(), startedAt: z.string(), seenAt: z.string() })
  .meta({ id: 'UploadSummary' });
export type UploadSummary = z.infer<typeof UploadSummary>;

/** What has arrived of a file: before going on, whoever sends it compares the beginning of theirs. */
export const ArrivedPart = z
  .object({
    offset: z.number(),
    /** Of the first `offset` bytes (FIPS 180-4), in lower-case hex. */
    sha256: z.string(),
  })
  .meta({ id: 'ArrivedPart' });
export type ArrivedPart = z.infer<typeof ArrivedPart>;

export const SampleList = z
  .object({
    samples: z.array(SampleSummary),
    /** Own uploads that have not arrived as a whole. */
    uploads: z.array(UploadSummary),
    abilities: z.array(z.enum(['add'])),
  })
  .meta({ id: 'SampleList' });
export type SampleList = z.infer<typeof SampleList>;

export const SampleListParams = z.strictObject({ modelId: z.uuid() });
export const SampleParams = z.strictObject({ modelId: z.uuid(), sampleId: z.uuid() });
export const UploadParams = z.strictObject({ modelId: z.uuid(), uploadId: z.uuid() });
export const DefinitionParams = z.strictObject({ modelId: z.uuid(), sampleId: z.uuid(), definitionId: z.uuid() });
