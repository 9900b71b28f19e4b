import { z } from 'zod';
import { recordEvent } from '../record/event';
import { ChoiceRule, DeclinedMethod } from './schema';

const Choice = z.strictObject({ index: z.int(), lambda: z.number(), kept: z.int(), rule: ChoiceRule });

export const fitEvents = [
  recordEvent('fit.started', 'fit', { after: z.strictObject({ name: z.string(), mixing: z.number(), specificationSha256: z.string(), inference: DeclinedMethod.optional(), populationBadRate: z.number().optional() }), reason: z.string().optional() }),
  recordEvent('fit.penalty-chosen', 'fit', { before: Choice.nullable(), after: Choice, reason: z.string() }),
] as const;
