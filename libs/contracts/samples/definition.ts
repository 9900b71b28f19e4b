import { z } from 'zod';
import { ProblemItem } from '../problems/schema';
import type { DataReading, Exclusion, GroupsBy, OutcomeDefinition, Partition as SpecificationPartition } from '../specification/types';
import { ColumnRole } from './columns';
import { ColumnKind, ReadingChoices } from './reading';

const value = z.string().max(1000);
const columnName = z.string().min(1).max(1000);
const limit = z.union([z.number(), z.iso.date()]);

/** A test on one column, as in the specification: several keys must all hold. */
export const ColumnTest = z.strictObject({
  column: columnName,
  in: z.array(value).max(1000).optional(),
  notIn: z.array(value).max(1000).optional(),
  below: limit.optional(),
  atMost: limit.optional(),
  above: limit.optional(),
  atLeast: limit.optional(),
  missing: z.boolean().optional(),
});
export type ColumnTest = z.infer<typeof ColumnTest>;

/** An exclusion under edit: one or several tests that must all hold, or any of which is enough. */
export const ExclusionRule = z.strictObject({
  reason: z.string().max(300),
  combine: z.enum(['all', 'any']),
  tests: z.array(ColumnTest).max(20),
});
export type ExclusionRule = z.infer<typeof ExclusionRule>;

export const SpecialCode = z.strictObject({
  label: z.string().trim().min(1, 'Say what the code means').max(200),
  /** Numbers for a numeric column, texts for a categorical one. */
  values: z
    .array(z.union([z.number(), value]))
    .min(1)
    .max(100),
});
export type SpecialCode = z.infer<typeof SpecialCode>;

export const DefinedColumn = z.strictObject({
  column: columnName,
  kind: ColumnKind,
  role: ColumnRole,
  protected: z.boolean(),
  /** The legal basis that the author proposes for a protected characteristic. It permits nothing: compliance does (permissions/). */
  citation: z.string().max(1000).nullable(),
  special: z.array(SpecialCode).max(50),
  /** Suspected special codes of which somebody said that they are amounts. */
  amounts: z.array(value).max(100).optional(),
  /** Why it is not used, or why a flag was accepted. */
  reason: z.string().max(1000).nullable(),
});
export type DefinedColumn = z.infer<typeof DefinedColumn>;

/** Bad, indeterminate and excluded by days past due and months on book; the days past due are the column with the role of the outcome. */
export const DraftOutcomeRule = z.strictObject({
  bad: z.number().positive('More than 0 days').max(10_000),
  indeterminate: z.number().min(0, 'At least 0 days').max(10_000).nullable(),
  missing: z.enum(['refuse', 'excluded']),
  monthsOnBook: z.strictObject({ column: columnName, least: z.number().positive('More than 0 months').max(1000) }).nullable(),
});
export type DraftOutcomeRule = z.infer<typeof DraftOutcomeRule>;

export const DraftOutcome = z.strictObject({
  good: z.array(value).max(1000),
  bad: z.array(value).max(1000),
  indeterminate: z.array(value).max(1000),
  excluded: z.array(value).max(1000),
  /** Where it is stated, the lists above do not count. */
  rule: DraftOutcomeRule.optional(),
});
export type DraftOutcome = z.infer<typeof DraftOutcome>;

/** Values of the decision column that mean "declined"; such rows have no outcome. */
export const DraftDeclined = z.strictObject({ values: z.array(value).max(1000) });

export const DraftPartition = z.discriminatedUnion('by', [
  z.strictObject({
    by: z.literal('column'),
    development: z.array(value).max(1000),
    holdOut: z.array(value).max(1000),
    outOfTime: z.array(value).max(1000),
  }),
  z.strictObject({
    by: z.literal('seed'),
    seed: z
      .int()
      .min(0)
      .max(2 ** 32 - 1),
    /** Share of goods and of bads that becomes hold-out. */
    holdOutShare: z.number().min(0).max(0.9),
    /** Rows of the application date from..to (both included, null = open) are out-of-time. */
    outOfTime: z.strictObject({ from: z.iso.date().nullable(), to: z.iso.date().nullable() }).nullable(),
  }),
]);
export type DraftPartition = z.infer<typeof DraftPartition>;

/**
 * What a definition will say, while it is being worked on: may be incomplete. The columns of outcome, decision, weight, partition and
 * application date are those with that role.
 */
export const DraftContent = z.strictObject({
  columns: z.array(DefinedColumn).max(200),
  outcome: DraftOutcome,
  declined: DraftDeclined.nullable(),
  exclusions: z.array(ExclusionRule).max(100),
  partition: DraftPartition,
});
export type DraftContent = z.infer<typeof DraftContent>;

export const Draft = z
  .object({
    content: DraftContent,
    /** Counts saves; the ETag. */
    revision: z.int(),
    savedAt: z.string(),
    savedBy: z.string(),
    /** Everything that still stands in the way of confirming. */
    problems: z.array(ProblemItem),
  })
  .meta({ id: 'SampleDraft' });
export type Draft = z.infer<typeof Draft>;

export const PartitionCounts = z.object({
  rows: z.int(),
  goods: z.int(),
  bads: z.int(),
  indeterminates: z.int(),
  /** Sum of the weights of goods and bads. */
  weight: z.number(),
  /** bads / (goods + bads), null without either. */
  badRate: z.number().nullable(),
  /** Weight of the bads / weight of goods and bads; left out without a weight, and where a definition was confirmed before this was counted. */
  weightedBadRate: z.number().nullable().optional(),
});
export type PartitionCounts = z.infer<typeof PartitionCounts>;

/** Out-of-time: only its rows are told until it is opened, so that nobody looks at its outcome by the way. */
export const CoveredCounts = z.object({
  covered: z.boolean(),
  rows: z.int(),
  goods: z.int().nullable(),
  bads: z.int().nullable(),
  indeterminates: z.int().nullable(),
  weight: z.number().nullable(),
  badRate: z.number().nullable(),
  weightedBadRate: z.number().nullable().optional(),
});
export type CoveredCounts = z.infer<typeof CoveredCounts>;

/**
 * One step of the waterfall from the file down to development: what went out, and what is left after it. `left` of the step before minus
 * `out` is `left`, exactly; so are goods and bads, where those of a step that tells none count as 0.
 */
export const WaterfallStep = z.object({
  kind: z.enum(['source', 'exclusion', 'outcome', 'declined', 'out-of-time', 'hold-out', 'development']),
  label: z.string(),
  out: z.int(),
  /** Goods and bads among those that went out; null where they have no outcome or it is covered. */
  outGoods: z.int().nullable(),
  outBads: z.int().nullable(),
  left: z.int(),
  /**
   * Goods and bads among the rows that are left, without those of out-of-time while it is covered: nothing tells them, nor any difference. Left
   * out where a definition was confirmed before this was counted.
   */
  leftGoods: z.int().optional(),
  leftBads: z.int().optional(),
});
export type WaterfallStep = z.infer<typeof WaterfallStep>;

const KnownOutcomes = z.object({ goods: z.int(), bads: z.int(), badRate: z.number().nullable() });
/** The whole definition carried out again with another reading of the indeterminates; out-of-time is not told. */
export const SensitivityCase = z.object({
  indeterminates: z.enum(['as they are', 'as good', 'as bad']),
  development: KnownOutcomes,
  holdOut: KnownOutcomes,
});
export type SensitivityCase = z.infer<typeof SensitivityCase>;

/** What each part of an outcome by rule takes. Rows that are left after the exclusions; goods, bads and indeterminates without out-of-time. */
export const RuleCounts = z.object({
  tooFewMonths: z.int(),
  missing: z.int(),
  bads: z.int(),
  indeterminates: z.int(),
  goods: z.int(),
  badRate: z.number().nullable(),
});
export type RuleCounts = z.infer<typeof RuleCounts>;

export const DefinitionCounts = z.object({
  waterfall: z.array(WaterfallStep),
  partitions: z.object({ development: PartitionCounts, holdOut: PartitionCounts, outOfTime: CoveredCounts }),
  declined: z.int(),
  /** What an outcome by rule makes of the rows; null where the outcome is by values. */
  byRule: RuleCounts.nullable(),
  /** Empty where nothing is indeterminate; null for a definition confirmed before this was counted. */
  sensitivity: z.array(SensitivityCase).nullable(),
});
export type DefinitionCounts = z.infer<typeof DefinitionCounts>;

/** What the draft would give, or all that stands in the way. */
export const DraftCheck = z
  .object({ problems: z.array(ProblemItem), counts: DefinitionCounts.nullable() })
  .meta({ id: 'DraftCheck' });
export type DraftCheck = z.infer<typeof DraftCheck>;

/** The head of a specification: reading, exclusions, outcome, partition, weight, and what each column is. Immutable. */
export interface SampleDefinitionContent {
  data: DataReading;
  exclusions: Exclusion[];
  outcome: OutcomeDefinition;
  declined: { column: string; values: string[]; method: 'none'; bands: number; uplift: number } | null;
  weight: { column: string } | null;
  partition: SpecificationPartition;
  /** What the groups of the group key are drawn by, in the partition and in folds; by their values where it is left out. */
  groupsBy?: GroupsBy;
  columns: DefinedColumn[];
}

export const Definition = z
  .object({
    id: z.uuid(),
    sampleId: z.uuid(),
    modelId: z.uuid(),
    /** 1, 2, ... within the sample. */
    number: z.int(),
    content: z.custom<SampleDefinitionContent>((content) => typeof content === 'object' && content !== null),
    counts: DefinitionCounts,
    /** SHA-256 over the RFC 8785 canonical JSON of the content. */
    sha256: z.string(),
    createdAt: z.string(),
    createdBy: z.string(),
  })
  .meta({ id: 'SampleDefinition' });
export type Definition = z.infer<typeof Definition>;

export const DefinitionSummary = Definition.omit({ content: true }).meta({ id: 'SampleDefinitionSummary' });
export type DefinitionSummary = z.infer<typeof DefinitionSummary>;
export const DefinitionList = z.object({ definitions: z.array(DefinitionSummary) }).meta({ id: 'SampleDefinitionList' });
export type DefinitionList = z.infer<typeof DefinitionList>;

/** Confirms the draft as it was last read. */
export const ConfirmDraft = z.strictObject({ revision: z.int() });
/** Result of the run "confirm sample" (Run.result). */
export const ConfirmationResult = z.object({ definitionId: z.uuid(), number: z.int() });

export const ConfirmReading = ReadingChoices;
