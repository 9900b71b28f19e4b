import { z } from 'zod';
import { recordEvent } from './event';

export const recordEvents = [
  recordEvent('record.verified', 'record', {
    detail: z.strictObject({ rows: z.int(), intact: z.boolean(), faults: z.int(), head: z.string() }),
  }),
] as const;
