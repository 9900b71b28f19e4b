import { z } from 'zod';
import { SlotCounts } from './bins';

/** Counts of the slots of a characteristic (see Fine) in one month of application. */
export const MonthCounts = SlotCounts.extend({ month: z.string().regex(/^\d{4}-\d{2}$/) });
export type MonthCounts = z.infer<typeof MonthCounts>;

/** Months of development and hold-out, ascending, each with rows; and rows of both that have no date. */
export const MonthlyCounts = z.object({
  development: z.array(MonthCounts),
  holdOut: z.array(MonthCounts),
  undated: z.int(),
});
export type MonthlyCounts = z.infer<typeof MonthlyCounts>;

export const CharacteristicMonths = z
  .object({
    /** Column with the role of the application date; null without one, and with months beyond what can be told apart. */
    dateColumn: z.string().nullable(),
    ...MonthlyCounts.shape,
    /** Null while covered. */
    outOfTime: z.array(MonthCounts).nullable(),
  })
  .meta({ id: 'BinningCharacteristicMonths' });
export type CharacteristicMonths = z.infer<typeof CharacteristicMonths>;
