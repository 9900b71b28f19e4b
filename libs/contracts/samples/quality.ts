import { z } from 'zod';
import { ColumnRole, columnFlags } from './columns';
import { ColumnKind } from './reading';

/** What the report can raise: what reading a column finds, and what only the definition's outcome, codes and dates can tell. */
export const qualityFlagCodes = [
  ...columnFlags,
  'outliers',
  'drift',
  'missing-drift',
  'leakage-value',
  'missing-one-outcome',
  'one-value-per-outcome',
  'duplicate-rows',
  'months-without-rows',
] as const;
export const QualityFlagCode = z.enum(qualityFlagCodes);
export type QualityFlagCode = z.infer<typeof QualityFlagCode>;

export const flagAnswers = ['accepted', 'not used'] as const;
/** accepted: it stays as it is, and the reason says why; not used: the column takes no part from the next definition on. */
export const FlagAnswerKind = z.enum(flagAnswers);

export const FlagAnswer = z.object({ answer: FlagAnswerKind, reason: z.string(), by: z.string(), at: z.string() });
export type FlagAnswer = z.infer<typeof FlagAnswer>;

export const QualityFlag = z.object({
  /** Null for what concerns the file as a whole. */
  column: z.string().nullable(),
  code: QualityFlagCode,
  weight: z.enum(['stop', 'look', 'note']),
  /** One sentence with its number. */
  finding: z.string(),
  /** The latest answer; null while nobody has given one. */
  answer: FlagAnswer.nullable(),
});
export type QualityFlag = z.infer<typeof QualityFlag>;

/** One column in a line of the report. Counts are rows of the whole file; IV is over development and hold-out alone. */
export const ColumnQuality = z.object({
  position: z.int(),
  column: z.string(),
  kind: ColumnKind,
  role: ColumnRole,
  missing: z.int(),
  /** Rows that hold a special code of the definition. */
  special: z.int(),
  /** Texts in a numeric column that are no numbers. */
  unreadable: z.int(),
  distinct: z.int(),
  /** Of values that are neither missing nor special; type 7 quantiles (Hyndman and Fan 1996). */
  quantiles: z.array(z.object({ share: z.number(), value: z.number() })).nullable(),
  /** Beyond the outer fences of Tukey (1977); null where there are none. */
  outliers: z.object({ below: z.int(), above: z.int(), lower: z.number(), upper: z.number() }).nullable(),
  informationValue: z.number().nullable(),
  /** The month that differs most from the first year; null where nothing can be compared. */
  drift: z.object({ month: z.string(), psi: z.number(), critical: z.number() }).nullable(),
});
export type ColumnQuality = z.infer<typeof ColumnQuality>;

/** Goods and bads of development and hold-out; `unknown` are all other rows, those of out-of-time among them, covered or opened. */
const outcomes = { goods: z.int(), bads: z.int(), unknown: z.int() };

export const QualityMonth = z.object({ month: z.string(), rows: z.int(), ...outcomes });
export type QualityMonth = z.infer<typeof QualityMonth>;

/** Groups by which a column is compared: of numbers ten of about equal size in the first year, of texts the most frequent. */
export const QualityGroup = z.object({
  label: z.string(),
  kind: z.enum(['values', 'other', 'special', 'missing']),
  rows: z.int(),
  ...outcomes,
});
export type QualityGroup = z.infer<typeof QualityGroup>;

export const ColumnQualityDetail = z
  .object({
    ...ColumnQuality.shape,
    groups: z.array(QualityGroup),
    /** Between neighbouring edges, lower-closed; what lies beyond the first and last is counted in the first and last bar. */
    histogram: z
      .object({
        edges: z.array(z.number()),
        goods: z.array(z.int()),
        bads: z.array(z.int()),
        unknown: z.array(z.int()),
      })
      .nullable(),
    /** By month of application: rows by group, and the stability index against the first year (null within it). */
    months: z.array(
      z.object({ month: z.string(), rows: z.int(), missing: z.int(), psi: z.number().nullable(), groups: z.array(z.int()) }),
    ),
  })
  .meta({ id: 'ColumnQualityDetail' });
export type ColumnQualityDetail = z.infer<typeof ColumnQualityDetail>;

export const QualityReport = z.object({
  definitionId: z.uuid(),
  /** Of the definition whose outcome, codes and dates it takes. */
  definitionNumber: z.int(),
  madeAt: z.string(),
  rows: z.int(),
  duplicateRows: z.int(),
  /** Empty without a column of application dates. */
  months: z.array(QualityMonth),
  /** The months that others are compared with; null where there are none to compare. */
  baseline: z.object({ from: z.string(), to: z.string(), rows: z.int() }).nullable(),
  columns: z.array(ColumnQuality),
  flags: z.array(QualityFlag),
  /** One sentence that says what the report says. */
  finding: z.string(),
});
export type QualityReport = z.infer<typeof QualityReport>;

/** The report of a sample's latest definition, or why there is none yet. */
export const QualityState = z
  .object({
    report: QualityReport.nullable(),
    definitionId: z.uuid().nullable(),
    /** The run that makes it now. */
    runId: z.uuid().nullable(),
    finding: z.string(),
    abilities: z.array(z.enum(['answer', 'make'])),
  })
  .meta({ id: 'QualityState' });
export type QualityState = z.infer<typeof QualityState>;

/** Which column of the report, by its heading. */
export const QualityColumnQuery = z.strictObject({ column: z.string().min(1).max(1000) });

export const NewFlagAnswer = z.strictObject({
  column: z.string().max(1000).nullable(),
  code: QualityFlagCode,
  answer: FlagAnswerKind,
  reason: z.string().trim().min(5, 'Say why, in a few words').max(2000),
});
export type NewFlagAnswer = z.infer<typeof NewFlagAnswer>;

/** Result of the run "sample.quality" (Run.result). */
export const QualityResult = z.object({ definitionId: z.uuid(), flags: z.int() });
