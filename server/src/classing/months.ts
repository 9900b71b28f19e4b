import type { Fine } from '@tallystone/contracts/binnings/bins';
import type { MonthCounts, MonthlyCounts } from '@tallystone/contracts/binnings/months';
import { slotCount } from '@tallystone/numeric/bench';
import { NO_MONTH, type RowMonths } from '../replay/row-months';
import type { TextColumn } from '../replay/source';
import { DEVELOPMENT, HOLD_OUT, OUT, OUT_OF_TIME } from '../replay/types';
import type { CountedRows } from './fine-classes';

export interface CountedMonths {
  readonly counts: MonthlyCounts;
  /** Apart, as it is covered until somebody opens it. */
  readonly outOfTime: MonthCounts[];
}

/**
 * Goods and bads of every slot by month and partition: the counts of the fine classes, parted by month. Rows without a month are counted alone.
 *
 * @param slotOf the slot of each of the column's texts; null where there is no column
 */
export function countMonths(
  column: TextColumn | null,
  slotOf: Uint8Array | null,
  { rows, partition, outcome, weights }: CountedRows,
  fine: Pick<Fine, 'kind' | 'edges' | 'categories' | 'special'>,
  months: RowMonths,
): CountedMonths {
  const slots = slotCount(fine as Fine);
  const size = months.names.length * slots;
  // By partition, month and slot, bads before goods.
  const counts = new Uint32Array(3 * size * 2);
  const sums = weights ? new Float64Array(counts.length) : counts;
  let undated = 0;
  if (column && slotOf) {
    const { codes } = column;
    for (let row = 0; row < rows; row++) {
      const where = partition[row];
      // Outcome 0 is bad, 1 good, anything else is not counted.
      if (where === OUT || outcome[row] > 1) continue;
      const month = months.of[row];
      if (month === NO_MONTH) {
        if (where !== OUT_OF_TIME) undated++;
        continue;
      }
      const at = ((where - 1) * size + month * slots + slotOf[codes[row]]) * 2 + outcome[row];
      counts[at]++;
      if (weights) sums[at] += weights[row];
    }
  }
  const listed = (where: number): MonthCounts[] =>
    months.names.flatMap((month, index) => {
      const first = ((where - 1) * size + index * slots) * 2;
      const of = (value: (at: number) => number): number[] => Array.from({ length: slots }, (_, slot) => value(first + 2 * slot));
      const one = {
        month,
        rows: of((at) => counts[at] + counts[at + 1]),
        goods: of((at) => sums[at + 1]),
        bads: of((at) => sums[at]),
      };
      return one.rows.some((count) => count > 0) ? [one] : [];
    });
  return {
    counts: { development: listed(DEVELOPMENT), holdOut: listed(HOLD_OUT), undated },
    outOfTime: listed(OUT_OF_TIME),
  };
}
