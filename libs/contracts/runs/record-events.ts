import { z } from 'zod';
import { recordEvent } from '../record/event';

export const runEvents = [
  recordEvent('run.started', 'run', { detail: z.strictObject({ kind: z.string() }) }),
  recordEvent('run.cancelled', 'run', { detail: z.strictObject({ kind: z.string() }) }),
] as const;
