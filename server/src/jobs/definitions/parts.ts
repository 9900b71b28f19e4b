import { z } from 'zod';
import { definePart } from '../parts/definition';

/** Resamples `first` to `first + count - 1` of a version's stability study with this seed, each refitted at the version's penalty. */
export const resamplePart = definePart({
  kind: 'version.resample',
  payload: z.strictObject({ versionId: z.uuid(), seed: z.int(), first: z.int(), count: z.int().min(1) }),
  result: z.array(
    z.strictObject({ resample: z.int(), intercept: z.number(), coefficients: z.array(z.number()), converged: z.boolean() }),
  ),
});
