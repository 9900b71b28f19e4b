import { z } from 'zod';

const finite = z.number();

export const CorrelatedCharacteristic = z.object({
  id: z.uuid(),
  column: z.string(),
  informationValue: finite,
  /** Variance inflation factor among the characteristics here; null where the column has no variance or is exactly collinear. */
  inflation: finite.nullable(),
  collinear: z.boolean(),
});
export type CorrelatedCharacteristic = z.infer<typeof CorrelatedCharacteristic>;

/** How far the correlations calculated last still speak of the bins as they are. */
export const CorrelationStanding = z.object({
  /** Null before they were calculated. */
  calculatedAt: z.string().nullable(),
  /**
   * Included characteristics whose bins have changed since, or that were not there; in the order of the sample's columns. What is left out changes
   * nothing: groups are those of the included ones.
   */
  changed: z.array(z.string()),
  /** The run that calculates them now. */
  runId: z.uuid().nullable(),
});
export type CorrelationStanding = z.infer<typeof CorrelationStanding>;

/** Correlations of WOE over development rows, of the characteristics that are included. */
export const Correlations = CorrelationStanding.extend({
  rows: z.int(),
  characteristics: z.array(CorrelatedCharacteristic),
  /** Row by row in the order of `characteristics`; null for a column without variance. */
  matrix: z.array(z.array(finite.nullable())),
  abilities: z.array(z.enum(['calculate'])),
}).meta({ id: 'BinningCorrelations' });
export type Correlations = z.infer<typeof Correlations>;

export const CorrelationRun = z.object({ runId: z.uuid() }).meta({ id: 'BinningCorrelationRun' });
