import { z } from 'zod';
import { recordEvent } from '../record/event';

export const outOfTimeEvents = [
  recordEvent('out-of-time.opened', 'sample-definition', {
    /** How often these rows had been opened before, under whatever definition. */
    detail: z.strictObject({ earlier: z.int() }),
    reason: z.string(),
  }),
] as const;
