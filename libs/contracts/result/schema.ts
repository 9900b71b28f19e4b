import { z } from 'zod';
import type { Result } from './types';

/** zod schema of a result file, format version 1. Strict: a key that is not listed is an error. */

const number = z.number();
const count = z.number().int().nonnegative();
const maybe = number.nullable();

const partitionCounts = z.strictObject({ rows: count, goods: count, bads: count, indeterminates: count, weight: number });
const stability = z.strictObject({ holdOut: maybe, outOfTime: maybe });

const bin = z.strictObject({
  label: z.string(),
  rows: count,
  goods: number,
  bads: number,
  woe: number,
  coefficient: number.optional(),
  points: number,
  pointsRounded: z.number().int(),
});

const metrics = z.strictObject({
  auc: number,
  aucStandardError: maybe,
  gini: number,
  ks: number,
  brier: number,
  logLoss: number,
  hosmerLemeshow: z
    .strictObject({ statistic: maybe, groups: count, degreesOfFreedom: z.number().int(), pValue: maybe })
    .nullable(),
  calibrationInTheLarge: maybe,
  calibrationSlope: maybe,
  calibrationIntercept: maybe,
  meanScore: number,
  smallestScore: number,
  largestScore: number,
  aucRounded: maybe,
  largestRounding: maybe,
});

const metricsByPartition = z.strictObject({
  development: metrics.nullable(),
  holdOut: metrics.nullable(),
  outOfTime: metrics.nullable(),
});

const bandCounts = z.strictObject({ rows: count, goods: count, bads: count });
const sha256 = z.string().regex(/^[0-9a-f]{64}$/, 'expected 64 lower-case hexadecimal digits');

export const resultSchema: z.ZodType<Result, unknown> = z.strictObject({
  format: z.literal('tallystone-result'),
  formatVersion: z.literal(1),
  specificationSha256: sha256,
  dataSha256: sha256,
  solver: z.strictObject({ name: z.string(), version: z.string() }),
  counts: z.strictObject({
    development: partitionCounts,
    holdOut: partitionCounts,
    outOfTime: partitionCounts,
    excluded: z.array(z.strictObject({ reason: z.string(), rows: count, bads: count })),
    declined: count,
  }),
  characteristics: z.array(
    z.strictObject({ column: z.string(), informationValue: maybe, coefficient: maybe, bins: z.array(bin), csi: stability }),
  ),
  intercept: number,
  lambda: number,
  mixing: number,
  kept: count,
  objective: number,
  deviance: number,
  optimalityResidual: number,
  converged: z.boolean(),
  basePoints: number,
  path: z.array(
    z.strictObject({
      lambda: number,
      intercept: number,
      coefficients: z.record(z.string(), z.union([number, z.array(number)])),
      deviance: number,
      optimalityResidual: number,
    }),
  ),
  crossValidation: z
    .strictObject({
      lambda: z.array(number),
      mean: z.array(number),
      standardError: z.array(number),
      minimum: count,
      oneStandardError: count,
      atGridEnd: z.boolean(),
      /** Places on the path where a fold's fit did not reach its tolerance; absent where all did, and where it was not kept. */
      notConverged: z.array(count).optional(),
    })
    .nullable(),
  metrics: metricsByPartition,
  weightedMetrics: metricsByPartition.nullable(),
  bands: z.array(
    z.strictObject({
      from: maybe,
      to: maybe,
      development: bandCounts,
      holdOut: bandCounts,
      outOfTime: bandCounts,
    }),
  ),
  psi: stability,
});
