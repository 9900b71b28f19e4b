import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { numbersOfDate } from '../../reading/dates';

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
      .map((example) => ({ example, numbers: numbersOfDate(example.text) }));
    const dates = values.flatMap(({ example, numbers }) => (numbers === null ? [] : [{ example, numbers }]));
    if (dates.length === 0 || dates.length < mostlyDates * values.length) return;
    columns.push({ column, position, example: dates[0].example });
    dayFirst = earlier(dayFirst, dates.find(({ numbers: [first, second] }) => first > 12 && second <= 12)?.example);
    monthFirst = earlier(monthFirst, dates.find(({ numbers: [first, second] }) => second > 12 && first <= 12)?.example);
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
  if (dayFirst && monthFirst) return `${say(dayFirst, 'day')}, and ${say(monthFirst, 'month')}: no order reads both.`;
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
