import { z } from 'zod';
import { SensitivityCase } from '../samples/definition';

const count = z.int();

/** The fit with the indeterminates of development read one way. */
export const Refit = z.strictObject({
  indeterminates: SensitivityCase.shape.indeterminates,
  /** Of development, as they were fitted. */
  goods: count,
  bads: count,
  kept: count,
  converged: z.boolean(),
  /** On the rows of `OutcomeRefits`. */
  gini: z.number(),
  /** Spearman, with the scores of the fit as it is defined; null where a fit keeps nothing. */
  rankCorrelation: z.number().nullable(),
  /** Share of the rows decided on otherwise at the same approval rate; null while no cut-off is stated. */
  decisionsChanged: z.number().nullable(),
});
export type Refit = z.infer<typeof Refit>;

/** The fit again at the same penalty, with every indeterminate as good and as bad, held against the fit as it is defined. */
export const OutcomeRefits = z.strictObject({
  /** The applicants who are scored by all: goods and bads of this partition, as defined. */
  partition: z.enum(['development', 'holdOut']),
  rows: count,
  approvalRate: z.number().nullable(),
  at: z.array(z.strictObject({ index: count, lambda: z.number(), cases: z.array(Refit) })),
});
export type OutcomeRefits = z.infer<typeof OutcomeRefits>;
