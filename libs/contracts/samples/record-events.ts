import { z } from 'zod';
import { recordEvent } from '../record/event';
import { FlagAnswerKind, QualityFlagCode } from './quality';
import { ReadingChoices } from './reading';

const File = z.strictObject({ fileName: z.string(), size: z.number(), sha256: z.string() });

export const sampleEvents = [
  recordEvent('sample.received', 'sample', { after: File }),
  recordEvent('sample.read', 'sample', {
    after: z.strictObject({ rows: z.int(), columns: z.int(), reading: ReadingChoices, sha256: z.string() }),
  }),
  recordEvent('sample.discarded', 'sample', { before: File }),
  recordEvent('sample.compared', 'sample', {
    after: z.strictObject({ revision: z.int(), partition: z.string(), largest: z.number().nullable() }),
  }),
  recordEvent('sample.defined', 'sample', {
    after: z.strictObject({
      definitionId: z.uuid(),
      number: z.int(),
      sha256: z.string(),
      development: z.int(),
      holdOut: z.int(),
      outOfTime: z.int(),
      /** Identifiers that reading had kept in clear, and that are keyed hashes from then on. */
      hashed: z.array(z.string()).optional(),
    }),
  }),
  recordEvent('sample.flag-answered', 'sample', {
    after: z.strictObject({ column: z.string().nullable(), code: QualityFlagCode, answer: FlagAnswerKind }),
    reason: z.string(),
  }),
  recordEvent('sample.dictionary-saved', 'sample', {
    after: z.strictObject({ columns: z.array(z.string()), from: z.enum(['page', 'file']) }),
  }),
  recordEvent('sample.erased', 'sample', {
    before: File,
    detail: z.strictObject({ versions: z.int(), runsEnded: z.int() }),
    reason: z.string(),
  }),
] as const;
