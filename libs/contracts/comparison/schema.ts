import { z } from 'zod';
import { DeclinedMethod } from '../fits/schema';

const number = z.number();
const nullable = z.number().nullable();

/** Two to five fits of one model, comma-separated; the accepts-only fit of one with inference joins in by itself. At the penalty chosen for each (the one-standard-error rule where nothing is chosen). */
export const ComparisonQuery = z.strictObject({
  fits: z
    .string()
    .transform((list) => list.split(',').map((id) => id.trim()))
    .pipe(z.array(z.uuid('Not the id of a fit')).min(2, 'Compare at least two fits').max(5, 'Compare at most five fits'))
    .refine((ids) => new Set(ids).size === ids.length, 'A fit is listed twice'),
});

export const ComparedMetrics = z.object({
  rows: z.int(),
  bads: number,
  auc: number,
  aucLower: nullable,
  aucUpper: nullable,
  ks: number,
  brier: number,
  calibrationInTheLarge: nullable,
  calibrationSlope: nullable,
});

export const ComparedFit = z.object({
  id: z.uuid(),
  number: z.int(),
  name: z.string(),
  index: z.int(),
  lambda: number,
  mixing: number,
  chosenBy: z.enum(['minimum', 'one-standard-error', 'by hand', 'not chosen']),
  kept: z.int(),
  /** Whether declined applicants entered the fit, and how. */
  inference: DeclinedMethod,
  development: ComparedMetrics.nullable(),
  holdOut: ComparedMetrics.nullable(),
  outOfTime: ComparedMetrics.nullable(),
});

/** One setting that is not the same in every fit; values as texts, in the order of the fits. */
export const DifferingSetting = z.object({ setting: z.string(), values: z.array(z.string()) });

export const ComparedCharacteristic = z.object({
  column: z.string(),
  label: z.string(),
  /** In the order of the fits; null: not part of that fit; 0: shrunk to zero. */
  coefficients: z.array(nullable),
  /** Largest less smallest points over the bins; null where not kept. */
  pointsRange: z.array(nullable),
  /** The coefficients kept do not all have one sign. */
  signFlip: z.boolean(),
  /** Bins differ between the fits, so that coefficients are not of the same WOE. */
  binsDiffer: z.boolean(),
});

/** DeLong's paired test against the first fit. On rows that both were developed on there is a difference but no p-value. */
export const PairedTest = z.object({
  partition: z.enum(['development', 'holdOut', 'outOfTime']),
  fitId: z.uuid(),
  difference: number,
  lower: nullable,
  upper: nullable,
  pValue: nullable,
});

/** A score that exists already, on the rows that have it. Like every score it is read as higher means safer. */
export const IncumbentFigures = z.object({
  rows: z.int(),
  /** Rows with a known outcome that have no such score: they are left out of its figures and of its test. */
  missing: z.int(),
  bads: number,
  auc: number,
  aucLower: nullable,
  aucUpper: nullable,
  ks: number,
  /** Each fit less the incumbent on these rows, in the order of the fits; DeLong's paired test. */
  tests: z.array(z.object({ fitId: z.uuid(), difference: number, lower: nullable, upper: nullable, pValue: nullable })),
});
export const ComparedIncumbent = z.object({
  column: z.string(),
  development: IncumbentFigures.nullable(),
  holdOut: IncumbentFigures.nullable(),
  outOfTime: IncumbentFigures.nullable(),
});

/** Hold-out, one segment at a time. `auc` in the order of the fits; null where the segment has too few goods or bads to be read. */
export const ComparedSegment = z.object({
  column: z.string(),
  value: z.string(),
  rows: z.int(),
  bads: z.int().nullable(),
  auc: z.array(nullable),
});
/** Fewest goods and fewest bads of a segment that is read. */
export const fewestInSegment = 20;

export const Comparison = z
  .object({
    fits: z.array(ComparedFit),
    /** All fits see the same rows in the same partitions; otherwise the reason, and no paired test. */
    sameRows: z.boolean(),
    rowsNote: z.string().nullable(),
    outOfTimeState: z.enum(['none', 'covered', 'opened']),
    settings: z.array(DifferingSetting),
    characteristics: z.array(ComparedCharacteristic),
    tests: z.array(PairedTest),
    /** Of the first fit's sample. Empty where no column has the role, or where the fits see other rows. */
    incumbents: z.array(ComparedIncumbent),
    segments: z.array(ComparedSegment),
  })
  .meta({ id: 'Comparison' });

export type Comparison = z.infer<typeof Comparison>;
export type ComparedFit = z.infer<typeof ComparedFit>;
export type ComparedCharacteristic = z.infer<typeof ComparedCharacteristic>;
export type ComparedMetrics = z.infer<typeof ComparedMetrics>;
export type PairedTest = z.infer<typeof PairedTest>;
export type ComparedIncumbent = z.infer<typeof ComparedIncumbent>;
export type IncumbentFigures = z.infer<typeof IncumbentFigures>;
export type ComparedSegment = z.infer<typeof ComparedSegment>;
