import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { dateReader, noSuchDate, ordersOfDate } from '../../reading/dates';

interface Row {
  readonly line: number;
  readonly cells: readonly string[];
}

interface Example {
  readonly column: string;
  readonly text: string;
  readonly line: number;
}

/** What the rows that were looked at say of the order in which their dates are written. */
export interface DateEvidence {
  /** Columns of dates whose order has to be stated. */
  readonly columns: readonly { readonly column: string; readonly position: number; readonly example: Example }[];
  /** The first value that can only be day first, and the first that can only be month first. */
  readonly dayFirst: Example | null;
  readonly monthFirst: Example | null;
}

/** A column counts as one of dates when this share of its values are, as elsewhere. */
const mostlyDates = 0.95;

export function dateEvidence(header: readonly string[], rows: readonly Row[], missing: readonly string[]): DateEvidence {
  const skipped = new Set(['', ...missing]);
  const columns: { column: string; position: number; example: Example }[] = [];
  let dayFirst: Example | null = null;
  let monthFirst: Example | null = null;
  const earlier = (one: Example | null, other: Example | undefined): Example | null =>
    other === undefined || (one !== null && one.line <= other.line) ? one : other;
  header.forEach((column, position) => {
    const values = rows
      .map(({ line, cells }) => ({ column, text: cells[position] ?? '', line }))
      .filter(({ text }) => !skipped.has(text))
      .map((example) => ({ example, orders: ordersOfDate(example.text) }));
    // Only a day that exists is evidence: reference numbers have the form of dates, too.
    const dates = values.flatMap(({ example, orders }) => (orders?.dayFirst || orders?.monthFirst ? [{ example, orders }] : []));
    if (dates.length === 0 || dates.length < mostlyDates * values.length) return;
    columns.push({ column, position, example: dates[0].example });
    dayFirst = earlier(dayFirst, dates.find(({ orders }) => !orders.monthFirst)?.example);
    monthFirst = earlier(monthFirst, dates.find(({ orders }) => !orders.dayFirst)?.example);
  });
  return { columns, dayFirst, monthFirst };
}

/** The order that the values decide; undefined where nothing decides, or some speak for one and some for the other. */
export function decidedOrder({ columns, dayFirst, monthFirst }: DateEvidence): ReadingChoices['dateOrder'] {
  if (columns.length === 0) return 'year-month-day';
  if (dayFirst && !monthFirst) return 'day-month-year';
  return monthFirst && !dayFirst ? 'month-day-year' : undefined;
}

/** What speaks for and against, in one sentence. */
export function dateReason({ columns, dayFirst, monthFirst }: DateEvidence): string {
  if (columns.length === 0) return 'No column holds dates other than YYYY-MM-DD.';
  const say = ({ text, line, column }: Example, order: string): string =>
    `${text} in line ${line} (${column}) can only be ${order} first`;
  if (dayFirst && monthFirst)
    return `${say(dayFirst, 'day')}, and ${say(monthFirst, 'month')}: no order reads both.${dayFirst.column === monthFirst.column ? '' : ' Under either, the other column stays text; to have the dates of both, write them as YYYY-MM-DD in the file and bring it in again.'}`;
  if (dayFirst) return `${say(dayFirst, 'day')}; no value looked at says month first.`;
  if (monthFirst) return `${say(monthFirst, 'month')}; no value looked at says day first.`;
  const [{ example }] = columns;
  return `${example.text} in line ${example.line} (${example.column}) can be day first or month first, and no value looked at tells which.`;
}

/** The question to the person, where an order is needed and nothing decides. */
export function dateQuestion(evidence: DateEvidence): ProblemItem {
  const [{ column, position }] = evidence.columns;
  return {
    code: 'date-order',
    message: `${dateReason(evidence)} Choose the date order; “year, month, day only” leaves such columns as text.`,
    where: { column, position: position + 1 },
  };
}

/** A column that has the form of dates, whose texts are kept as they are under the order that is stated. */
export interface NotDates {
  readonly column: string;
  readonly position: number;
  readonly example: Example;
  /** Its dates have another order; otherwise they are no dates at all. */
  readonly otherOrder: boolean;
}

/** Where fewer of the values in the form of a date are days of the calendar in any order, they are something else: two pairs of digits at will are in 6 %. */
const mostlyDays = 0.8;

/**
 * Columns in which reading under these choices would find days that do not exist because they hold no dates, or dates in the other order alone. A
 * column whose own values speak for the stated order is none of them: what does not exist there is wrong in the file.
 */
export function columnsNotDates(
  header: readonly string[],
  rows: readonly Row[],
  { dateOrder, dateTimes, missing }: Pick<ReadingChoices, 'dateOrder' | 'dateTimes' | 'missing'>,
): NotDates[] {
  const [read, swapped] = [dateOrder, other(dateOrder)].map((order) => dateReader(order, missing, dateTimes));
  if (!read || !swapped) return [];
  return header.flatMap((column, position) => {
    let formed = 0;
    let days = 0;
    let here = 0;
    let onlyHere = 0;
    let example: Example | null = null;
    for (const { cells, line } of rows) {
      const text = cells[position] ?? '';
      const stated = read(text);
      if (stated === null) continue;
      const isHere = stated !== noSuchDate;
      const isThere = swapped(text) !== noSuchDate;
      formed++;
      if (isHere || isThere) days++;
      if (isHere) here++;
      if (isHere && !isThere) onlyHere++;
      if (!isHere) example ??= { column, text, line };
    }
    if (example === null) return [];
    const otherOrder = days >= mostlyDays * formed;
    return otherOrder && (onlyHere > 0 || here >= mostlyDates * formed) ? [] : [{ column, position, example, otherOrder }];
  });
}

const other = (order: ReadingChoices['dateOrder']): ReadingChoices['dateOrder'] =>
  order === 'day-month-year' ? 'month-day-year' : order === 'month-day-year' ? 'day-month-year' : order;
