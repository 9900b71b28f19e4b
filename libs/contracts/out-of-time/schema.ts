import { z } from 'zod';

/** none: the sample has no out-of-time rows; covered: nobody has looked; opened: figures are served from now on. */
export const outOfTimeStates = ['none', 'covered', 'opened'] as const;
export const OutOfTimeState = z.enum(outOfTimeStates);
export type OutOfTimeState = z.infer<typeof OutOfTimeState>;

export const NewOpening = z.strictObject({
  reason: z.string().trim().min(10, 'Say in a sentence why the out-of-time figures are looked at now').max(2000),
});
export type NewOpening = z.infer<typeof NewOpening>;

/** One look under the cover. The first one under a definition opens it; later ones are kept as well, because each is a look with its own reason. */
export const Opening = z.object({
  id: z.uuid(),
  reason: z.string(),
  by: z.string(),
  at: z.string(),
  /** Where it was opened: number of the sample, and of the definition within it. */
  definitionId: z.uuid(),
  sample: z.int(),
  definition: z.int(),
  /** Whether that is the definition asked about, or one confirmed before or after it over the same rows. */
  under: z.enum(['this', 'earlier', 'later']),
});
export type Opening = z.infer<typeof Opening>;

export const OutOfTimeCover = z
  .object({
    definitionId: z.uuid(),
    /** Of this definition: each lifts its cover with a reason of its own. */
    state: OutOfTimeState,
    /** Under this definition and any other over the same rows, in the order they happened. */
    openings: z.array(Opening),
    abilities: z.array(z.enum(['open'])),
  })
  .meta({ id: 'OutOfTimeCover' });
export type OutOfTimeCover = z.infer<typeof OutOfTimeCover>;

export const ofDefinition = z.strictObject({ definitionId: z.uuid() });
