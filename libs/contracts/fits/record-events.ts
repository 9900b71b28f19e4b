import { z } from 'zod';
import { recordEvent } from '../record/event';
import { ChoiceRule } from './schema';

const Choice = z.strictObject({ index: z.int(), lambda: z.number(), kept: z.int(), rule: ChoiceRule });

export const fitEvents = [
  recordEvent('fit.started', 'fit', { after: z.strictObject({ name: z.string(), mixing: z.number(), specificationSha256: z.string() }) }),
  recordEvent('fit.penalty-chosen', 'fit', { before: Choice.nullable(), after: Choice, reason: z.string() }),
] as const;
