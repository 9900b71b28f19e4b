import type { Fine } from '@tallystone/contracts/binnings/bins';
import type { MonthCounts, MonthlyCounts } from '@tallystone/contracts/binnings/months';
import type { DataReading } from '@tallystone/contracts/specification/types';
import { slotCount } from '@tallystone/numeric/bench';
import { isoDay } from '../replay/columns';
import type { ColumnSource, TextColumn } from '../replay/source';
import { DEVELOPMENT, HOLD_OUT, OUT, OUT_OF_TIME } from '../replay/types';
import { type CountedRows, type DefinedCharacteristic, fineEntry, slotsOfTexts, textColumn } from './fine-classes';

/** The month in which each row applied. */
export interface RowMonths {
  /** Index into `names`, NO_MONTH without an ISO date. */
  readonly of: Uint16Array;
  /** "2024-03", ascending. */
  readonly names: readonly string[];
}

export const NO_MONTH = 0xffff;
/** Twenty years: a column with more is no date of application. */
const mostMonths = 240;

/** Months of a column of dates, in memory that threads share; null where there are more than anybody reads. */
export function monthsOfRows(dates: TextColumn): RowMonths | null {
  const months = dates.texts.map((text) => isoDay(text)?.slice(0, 7) ?? null);
  const names = [...new Set(months.filter((month) => month !== null))].sort();
  if (names.length === 0 || names.length > mostMonths) return null;
  const places = new Map(names.map((name, place) => [name, place]));
  const byText = Uint16Array.from(months, (month) => (month === null ? NO_MONTH : (places.get(month) ?? NO_MONTH)));
  const of = new Uint16Array(new SharedArrayBuffer(2 * dates.codes.length));
  for (let row = 0; row < of.length; row++) of[row] = byText[dates.codes[row]];
  return { of, names };
}

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
