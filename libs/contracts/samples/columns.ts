import { z } from 'zod';
import { ColumnKind } from './reading';

/** What a column is for. "protected" is not a role but a flag beside it. */
export const columnRoles = [
  'characteristic',
  'outcome',
  'decision',
  'incumbent score',
  'identifier',
  'group key',
  'weight',
  'partition',
  'application date',
  'segment',
  'not used',
] as const;
export const ColumnRole = z.enum(columnRoles);
export type ColumnRole = z.infer<typeof ColumnRole>;
/** Roles that one column of a sample has at most. */
export const singleRoles: readonly ColumnRole[] = ['outcome', 'decision', 'weight', 'partition', 'application date', 'group key'];

export const columnFlags = [
  'all-missing',
  'constant',
  'near-constant',
  'near-unique',
  'mostly-missing',
  'possible-leakage',
  'looks-like-identifier',
  'looks-like-email',
  'looks-like-name',
  'looks-like-protected',
  'holds-personal-data',
  'repeated-identifiers',
  'near-duplicate-identifiers',
  'like-categories',
  'unreadable-numbers',
  'numbers-as-text',
  'mixed-numbers',
  'ambiguous-numbers',
  'special-code-suspected',
  'doubtful-dates',
] as const;

export const ColumnFlag = z.object({
  code: z.enum(columnFlags),
  /** stop: the column is not used unless someone decides otherwise; look: deserves a look; note: worth knowing. */
  weight: z.enum(['stop', 'look', 'note']),
  /** One sentence with its number. */
  finding: z.string(),
  /**
   * Of `unreadable-numbers`, and of `numbers-as-text` where words stand among numbers: texts that may mean "missing" or be special codes, the most
   * frequent first, at most 20. Profiles from before have none.
   */
  values: z.array(z.string()).optional(),
});
export type ColumnFlag = z.infer<typeof ColumnFlag>;

const Counted = z.object({ value: z.string(), count: z.int() });

/** One column of a sample as it was read. Values of identifiers are shown as counts only. */
export const ColumnProfile = z
  .object({
    /** From 0, in the order of the file. */
    position: z.int(),
    column: z.string(),
    kind: ColumnKind,
    rows: z.int(),
    distinct: z.int(),
    missing: z.int(),
    /** How often each missing token stood there. */
    missingTokens: z.array(Counted),
    /** Values that look like special codes, with why: to be confirmed, never assumed. */
    specialSuspects: z.array(z.object({ value: z.string(), count: z.int(), reason: z.string() })),
    /** The most frequent values, at most 50; `valuesComplete` when these are all. */
    mostFrequent: z.array(Counted),
    valuesComplete: z.boolean(),
    /** Of the values that are neither missing nor suspected to be special codes. */
    numeric: z
      .object({
        smallest: z.number(),
        largest: z.number(),
        mean: z.number(),
        standardDeviation: z.number(),
        /** Type 7 quantiles (Hyndman and Fan 1996) of the values that are not missing. */
        quantiles: z.array(z.object({ share: z.number(), value: z.number() })),
        /** Counts between neighbouring edges, lower-closed, the last one closed on both sides. */
        histogram: z.object({ edges: z.array(z.number()), counts: z.array(z.int()) }),
        integers: z.boolean(),
      })
      .nullable(),
    date: z
      .object({ first: z.string(), last: z.string(), months: z.array(z.object({ month: z.string(), count: z.int() })) })
      .nullable(),
    text: z.object({ shortest: z.int(), longest: z.int() }).nullable(),
    flags: z.array(ColumnFlag),
    suggestedRole: ColumnRole,
    suggestedProtected: z.boolean(),
    /** Why this role is suggested, one sentence. */
    suggestion: z.string(),
    /** Values are kept as keyed hashes: the column identifies people. */
    hashed: z.boolean(),
  })
  .meta({ id: 'ColumnProfile' });
export type ColumnProfile = z.infer<typeof ColumnProfile>;

export const ColumnList = z
  .object({
    columns: z.array(ColumnProfile),
    rows: z.int(),
    /** Records that equal an earlier one in every column. */
    duplicateRows: z.int(),
    /** One sentence that says what the columns say. */
    finding: z.string(),
  })
  .meta({ id: 'ColumnList' });
export type ColumnList = z.infer<typeof ColumnList>;
