import { z } from 'zod';

/**
 * States one kind of act for the record of actions. An entity lists its acts in `libs/contracts/<entity>/record-events.ts`; the union of
 * all is in `record/events.ts`. `before`, `after` and `detail` hold what the act changed and are schemas, so that nothing undeclared
 * (a row of an applicant, say) can slip into a record that nobody can erase.
 *
 * @example
 * recordEvent('person.disabled', 'person', { before: z.strictObject({ state: PersonState }), after: z.strictObject({ state: PersonState }), reason: Reason })
 */
export function recordEvent<const A extends string, const E extends string, S extends EventShape>(
  action: A,
  entity: E,
  shape: S,
) {
  return z.strictObject({
    action: z.literal(action),
    entity: z.literal(entity),
    /** The row acted on; null where there is none, as for a failed sign-in. */
    entityId: z.string().nullable(),
    /** The model it belongs to: whoever works on that model reads its history. */
    modelId: z.uuid().nullable().optional(),
    ...shape,
  });
}

type EventShape = { before?: z.ZodType; after?: z.ZodType; detail?: z.ZodType; reason?: z.ZodType<string | undefined> };
