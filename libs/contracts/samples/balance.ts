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

/** The inputs of a confirmed definition by partition: nothing here tells an outcome. */
export const PartitionBalance = z
  .object({
    definitionId: z.uuid(),
    /** In the order of the file; null for a definition confirmed before this was worked out. */
    characteristics: z.array(CharacteristicBalance).nullable(),
  })
  .meta({ id: 'PartitionBalance' });
export type PartitionBalance = z.infer<typeof PartitionBalance>;
