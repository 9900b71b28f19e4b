import type { DateOrder, DateTimes } from '@tallystone/contracts/specification/types';

/**
 * Dates that are written day first or month first become ISO dates (ISO 8601, YYYY-MM-DD) while a file is read, if the order was stated; dates with a
 * time become their day, as it is written and whatever the zone, if that was stated.
 */

/** One or two digits, one or two digits, four digits, with the same sign (/ . -) between them. */
const form = /^(\d{1,2})([./-])(\d{1,2})\2(\d{4})$/;
/** Of the clock: hours and minutes, perhaps seconds and their fraction, perhaps a zone. */
const clock = /[T ](\d{1,2}):(\d{2})(?::(\d{2})(?:[.,]\d{1,9})?)?(?: ?(?:Z|[+-]\d{2}(?::?\d{2})?))?/.source;
const formWithTime = new RegExp(`^(\\d{1,2})([./-])(\\d{1,2})\\2(\\d{4})${clock}$`);
const yearFirst = new RegExp(`^(\\d{4})([./-])(\\d{1,2})\\2(\\d{1,2})(?:${clock})?$`);
const HYPHEN = 45;
/** The longest text of these forms. */
export const longestDateTime = 40;

/** A text has the form of a date in a stated order, and there is no such day. */
export const noSuchDate = Symbol('no such date');

/** Gives the ISO date that a text means, null for a text of another form, or `noSuchDate`. */
export type DateReader = (text: string) => string | null | typeof noSuchDate;

/**
 * Whether a text in the form of a date whose order has to be stated, with a time or without, is a day of the calendar day first and month first; null for
 * any other text. Two-digit years do not say which century.
 *
 * @example
 * ordersOfDate('13/04/2024') // { dayFirst: true, monthFirst: false }
 * ordersOfDate('18-58-9762') // { dayFirst: false, monthFirst: false }: a reference number
 */
export function ordersOfDate(text: string): { readonly dayFirst: boolean; readonly monthFirst: boolean } | null {
  if (!mayBeDate(text)) return null;
  const match = form.exec(text) ?? formWithTime.exec(text);
  if (match === null) return null;
  const [first, second, year] = [Number(match[1]), Number(match[3]), Number(match[4])];
  return { dayFirst: isDay(year, second, first), monthFirst: isDay(year, first, second) };
}

/** Whether a text becomes its day where dates with a time do: one with a time, or with the year first that is no ISO date. */
export const isDateTime = (text: string): boolean =>
  text.length <= longestDateTime &&
  (formWithTime.test(text) || (yearFirst.test(text) && (text.length !== 10 || text.charCodeAt(4) !== HYPHEN)));

/**
 * @param missing texts that mean "missing" in every column: they stay what they are, whether there is such a day or not
 * @returns null where only ISO dates are dates, so that nothing is looked at
 * @example
 * const read = dateReader('day-month-year', [])
 * read?.('3/4/2024') // '2024-04-03'
 * read?.('31.02.2024') // noSuchDate
 * dateReader(undefined, [], 'day')?.('2024-04-03T09:30:00Z') // '2024-04-03'
 */
export function dateReader(order: DateOrder | undefined, missing: readonly string[], dateTimes?: DateTimes): DateReader | null {
  const ordered = order === 'day-month-year' || order === 'month-day-year';
  const timed = dateTimes === 'day';
  if (!ordered && !timed) return null;
  const kept = new Set(missing);
  const dayFirst = order === 'day-month-year';
  const day = (year: string, month: string, date: string, time: readonly string[]): string | typeof noSuchDate =>
    isDay(Number(year), Number(month), Number(date)) && isTime(time)
      ? `${year}-${month.padStart(2, '0')}-${date.padStart(2, '0')}`
      : noSuchDate;
  return (text) => {
    if (timed && isSign(text.charCodeAt(4)) && isDateTime(text)) {
      const match = yearFirst.exec(text);
      if (match !== null) return kept.has(text) ? null : day(match[1], match[3], match[4], match.slice(5));
    }
    if (!ordered || !mayBeDate(text)) return null;
    const match = form.exec(text) ?? (timed && text.length <= longestDateTime ? formWithTime.exec(text) : null);
    if (match === null || kept.has(text)) return null;
    const [, first, , second, year, ...time] = match;
    return dayFirst ? day(year, second, first, time) : day(year, first, second, time);
  };
}

/** In words, for messages. */
export const orderWords: Record<DateOrder, string> = {
  'year-month-day': 'as year, month, day',
  'day-month-year': 'with the day first',
  'month-day-year': 'with the month first',
};

/** Tells most texts without a pattern: a sign stands after the first or second digit. */
function mayBeDate(text: string): boolean {
  return text.length >= 8 && text.length <= longestDateTime && (isSign(text.charCodeAt(1)) || isSign(text.charCodeAt(2)));
}

const isSign = (code: number): boolean => code >= 45 && code <= 47;

/** Proleptic Gregorian calendar, from year 1. */
function isDay(year: number, month: number, day: number): boolean {
  if (year < 1 || month < 1 || month > 12 || day < 1) return false;
  const leap = (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0;
  return day <= (month === 2 ? (leap ? 29 : 28) : [4, 6, 9, 11].includes(month) ? 30 : 31);
}

/** Hours, minutes and seconds of a day, a leap second among them; none of them is a time, too. */
const isTime = ([hours = '0', minutes = '0', seconds = '0']: readonly (string | undefined)[]): boolean =>
  Number(hours) < 24 && Number(minutes) < 60 && Number(seconds) <= 60;
