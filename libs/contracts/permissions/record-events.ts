import { z } from 'zod';
import { recordEvent } from '../record/event';

const Permitted = z.strictObject({ column: z.string(), citation: z.string() });

export const permissionEvents = [
  recordEvent('protected-column.permitted', 'sample-definition', { after: Permitted, reason: z.string() }),
  recordEvent('protected-column.withdrawn', 'sample-definition', { before: Permitted, reason: z.string() }),
  /** A definition was confirmed in which columns are protected no longer that an earlier one of the model flagged. */
  recordEvent('protected-column.unflagged', 'sample-definition', {
    after: z.strictObject({
      columns: z.array(z.strictObject({ column: z.string(), role: z.string(), sample: z.int(), definition: z.int() })),
    }),
    reason: z.string().optional(),
  }),
] as const;
