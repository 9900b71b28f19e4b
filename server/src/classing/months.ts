import type { Fine } from '@tallystone/contracts/binnings/bins';
import type { MonthCounts, MonthlyCounts } from '@tallystone/contracts/binnings/months';
import type { DataReading } from '@tallystone/contracts/specification/types';
import { slotCount } from '@tallystone/numeric/bench';
import { NO_MONTH, type RowMonths } from '../replay/row-months';
import type { ColumnSource } from '../replay/source';
import { DEVELOPMENT, HOLD_OUT, OUT, OUT_OF_TIME } from '../replay/types';
import { type CountedRows, type DefinedCharacteristic, fineEntry, slotsOfTexts, textColumn } from './fine-classes';

export interface CountedMonths {
  readonly counts: MonthlyCounts;
  /** Apart, as it is covered until somebody opens it. */
  readonly outOfTime: MonthCounts[];
}

/**
 * Goods and bads of every slot by month and partition: the counts of the fine classes, parted by month. Rows without a month are counted alone.
 *
 * @throws ReplayError for values that are no numbers
 */
export function countMonths(
  defined: DefinedCharacteristic,
  source: ColumnSource,
  data: DataReading,
  counted: CountedRows,
  fine: Pick<Fine, 'kind' | 'edges' | 'categories' | 'special'>,
  months: RowMonths,
): CountedMonths {
  const slots = slotCount(fine as Fine);
  const size = months.names.length * slots;
  const part = () => ({ rows: new Float64Array(size), goods: new Float64Array(size), bads: new Float64Array(size) });
  const parts = { [DEVELOPMENT]: part(), [HOLD_OUT]: part(), [OUT_OF_TIME]: part() };
  let undated = 0;
  const column = textColumn(defined, source, counted);
  if (column) {
    const slotOf = slotsOfTexts(defined, fineEntry(defined, fine.edges, fine.categories), column, data, counted, source, slots);
    const { partition, outcome, weights } = counted;
    for (let row = 0; row < counted.rows; row++) {
      const where = partition[row];
      // Outcome 0 is bad, 1 good, anything else is not counted.
      if (where === OUT || outcome[row] > 1) continue;
      if (months.of[row] === NO_MONTH) {
        if (where !== OUT_OF_TIME) undated++;
        continue;
      }
      const at = months.of[row] * slots + slotOf[column.codes[row]];
      const counts = parts[where as keyof typeof parts];
      counts.rows[at]++;
      (outcome[row] === 1 ? counts.goods : counts.bads)[at] += weights === null ? 1 : weights[row];
    }
  }
  const listed = ({ rows, goods, bads }: ReturnType<typeof part>): MonthCounts[] =>
    months.names.flatMap((month, index) => {
      const of = (values: Float64Array): number[] => [...values.subarray(index * slots, (index + 1) * slots)];
      const one = { month, rows: of(rows), goods: of(goods), bads: of(bads) };
      return one.rows.some((count) => count > 0) ? [one] : [];
    });
  return {
    counts: { development: listed(parts[DEVELOPMENT]), holdOut: listed(parts[HOLD_OUT]), undated },
    outOfTime: listed(parts[OUT_OF_TIME]),
  };
}
