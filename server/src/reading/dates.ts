import type { DateOrder } from '@tallystone/contracts/specification/types';

/** Dates that are written day first or month first become ISO dates (ISO 8601, YYYY-MM-DD) while a file is read, if the order was stated. */

/** One or two digits, one or two digits, four digits, with the same sign (/ . -) between them. */
const form = /^(\d{1,2})([./-])(\d{1,2})\2(\d{4})$/;

/** A text has the form of a date in a stated order, and there is no such day. */
export const noSuchDate = Symbol('no such date');

/** Gives the ISO date that a text means, null for a text of another form, or `noSuchDate`. */
export type DateReader = (text: string) => string | null | typeof noSuchDate;

/** The first two numbers of a text in the form of a date whose order has to be stated, or null. Two-digit years do not say which century. */
export function numbersOfDate(text: string): readonly [number, number] | null {
  const match = mayBeDate(text) ? form.exec(text) : null;
  return match && [Number(match[1]), Number(match[3])];
}

/**
 * @param missing texts that mean "missing" in every column: they stay what they are, whether there is such a day or not
 * @returns null where only ISO dates are dates, so that nothing is looked at
 * @example
 * const read = dateReader('day-month-year', [])
 * read?.('3/4/2024') // '2024-04-03'
 * read?.('31.02.2024') // noSuchDate
 */
export function dateReader(order: DateOrder | undefined, missing: readonly string[]): DateReader | null {
  if (order === undefined || order === 'year-month-day') return null;
  const kept = new Set(missing.filter((token) => form.test(token)));
  const dayFirst = order === 'day-month-year';
  return (text) => {
    const match = mayBeDate(text) ? form.exec(text) : null;
    if (match === null || kept.has(text)) return null;
    const [, first, , second, year] = match;
    const [day, month] = dayFirst ? [first, second] : [second, first];
    if (!isDay(Number(year), Number(month), Number(day))) return noSuchDate;
    return `${year}-${month.padStart(2, '0')}-${day.padStart(2, '0')}`;
  };
}

/** In words, for messages. */
export const orderWords: Record<DateOrder, string> = {
  'year-month-day': 'as year, month, day',
  'day-month-year': 'with the day first',
  'month-day-year': 'with the month first',
};

/** Tells most texts without a pattern: a date is short, and a sign stands after its first or second digit. */
function mayBeDate(text: string): boolean {
  return text.length >= 8 && text.length <= 10 && (isSign(text.charCodeAt(1)) || isSign(text.charCodeAt(2)));
}

const isSign = (code: number): boolean => code >= 45 && code <= 47;

/** Proleptic Gregorian calendar, from year 1. */
function isDay(year: number, month: number, day: number): boolean {
  if (year < 1 || month < 1 || month > 12 || day < 1) return false;
  const leap = (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0;
  return day <= (month === 2 ? (leap ? 29 : 28) : [4, 6, 9, 11].includes(month) ? 30 : 31);
}
