import type { z } from 'zod';

/** A kind of part, apart from the code that does it. A part is pure: its result follows from its payload, wherever and however often it is done. */
export interface PartDefinition<Payload extends z.ZodType = z.ZodType, Result extends z.ZodType = z.ZodType> {
  /** `entity.verb`. */
  readonly kind: string;
  /** Small: identifiers and settings, never data. */
  readonly payload: Payload;
  /** JSON: numbers come back to the last bit, but neither NaN nor the infinities. */
  readonly result: Result;
}

/**
 * @example
 * export const resamplePart = definePart({ kind: 'version.resample', payload: z.strictObject({ versionId: z.uuid(), first: z.int() }), result: z.array(Draw) });
 */
export function definePart<Payload extends z.ZodType, Result extends z.ZodType>(
  definition: PartDefinition<Payload, Result>,
): PartDefinition<Payload, Result> {
  return definition;
}
