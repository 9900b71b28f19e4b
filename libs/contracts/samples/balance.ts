import { z } from 'zod';

/** One characteristic, development against another partition. */
export const BalanceReading = z.object({
  /** Rows of the compared partition with a good or bad outcome. */
  rows: z.int(),
  /** Stability index: sum (a - e) ln(a / e) of the shares by class. */
  index: z.number(),
  classes: z.int(),
  /** Half a row was added to every count, because one side lacks a class. */
  smoothed: z.boolean(),
  /** What the index stays below in 95 of 100 draws when nothing has changed; null with one class. */
  criticalValue: z.number().nullable(),
  /** Probability of an index at least as large when nothing has changed. */
  pValue: z.number().nullable(),
  /** The class whose share differs most. */
  largest: z.object({ label: z.string(), development: z.number(), compared: z.number() }).nullable(),
});
export type BalanceReading = z.infer<typeof BalanceReading>;

export const CharacteristicBalance = z.object({
  column: z.string(),
  /** Null where the partition has no rows. */
  holdOut: BalanceReading.nullable(),
  outOfTime: BalanceReading.nullable(),
});
export type CharacteristicBalance = z.infer<typeof CharacteristicBalance>;

/** A partition that was compared while the definition was a draft. */
export const ComparedPartition = z.object({
  /** How the sample was split: the seed and the share, or the column. */
  partition: z.string(),
  /** The largest index of any characteristic; null without another partition. */
  largest: z.number().nullable(),
  comparedAt: z.string(),
  comparedBy: z.string(),
});
export type ComparedPartition = z.infer<typeof ComparedPartition>;

/** The inputs of a confirmed definition by partition: nothing here tells an outcome. */
export const PartitionBalance = z
  .object({
    definitionId: z.uuid(),
    /** In the order of the file; null for a definition confirmed before this was worked out. */
    characteristics: z.array(CharacteristicBalance).nullable(),
    /** Every partition that was compared before this one was confirmed and after the definition before it, the first one first. */
    compared: z.array(ComparedPartition),
  })
  .meta({ id: 'PartitionBalance' });
export type PartitionBalance = z.infer<typeof PartitionBalance>;

export const CompareDraft = z.strictObject({ revision: z.int() });
/** Result of the run "compare the partitions of a draft" (Run.result). */
export const DraftComparisonResult = z.object({ revision: z.int() });

/** The inputs of the draft by partition, as they were last compared. */
export const DraftBalance = z
  .object({
    /** Null while nothing was compared. */
    last: z
      .object({
        revision: z.int(),
        /** Whether the draft, and how the file is read, are still as they were compared. */
        current: z.boolean(),
        /** In the order of the file; null once the rows were erased. */
        characteristics: z.array(CharacteristicBalance).nullable(),
      })
      .nullable(),
    /** Every partition that was compared since the last definition was confirmed, the first one first. */
    compared: z.array(ComparedPartition),
  })
  .meta({ id: 'DraftBalance' });
export type DraftBalance = z.infer<typeof DraftBalance>;
