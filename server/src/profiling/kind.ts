import type { ColumnFlag } from '@tallystone/contracts/samples/columns';
import type { ColumnKind } from '@tallystone/contracts/samples/reading';
import { ordersOfDate } from '../reading/dates';
import { thin } from '../reading/thin';
import { looksLikeAmount, looksLikeDateTime } from './quantity';
import { type NumberFault, type NumberFormat, type NumberReader, ThousandsQuestion, isNumberSomehow, judgeFormat, numberReader } from '../reading/index';

/** Rows of one distinct text of a column that is not missing. */
export interface Counted {
  readonly text: string;
  readonly count: number;
}

export interface JudgedKind {
  readonly kind: ColumnKind;
  /** What speaks against it, or null. */
  readonly against: string | null;
  readonly flags: readonly ColumnFlag[];
}

/** A column counts as numbers when this share of its rows are numbers; the rest is counted and shown, never dropped. */
const mostlyNumbers = 0.95;

const faultWords: Record<NumberFault, string> = {
  empty: 'empty',
  blank: 'blanks only',
  'not-a-number-word': '“not a number”',
  infinity: 'infinity',
  hexadecimal: 'hexadecimal',
  'too-large': 'too large for a number',
  'too-small': 'too small for a number',
  'other-digits': 'digits of another script',
  text: 'text',
};

/** A calendar date in the one order that needs no guessing (ISO 8601, YYYY-MM-DD). */
export function isIsoDate(text: string): boolean {
  const match = /^(\d{4})-(\d{2})-(\d{2})$/.exec(text);
  if (!match) return false;
  const [year, month, day] = [Number(match[1]), Number(match[2]), Number(match[3])];
  return month >= 1 && month <= 12 && day >= 1 && day <= new Date(Date.UTC(year, month, 0)).getUTCDate() && year > 0;
}

const otherDate = /^(\d{1,2})[./-](\d{1,2})[./-](\d{2}|\d{4})$/;

/** A date in one of the orders, as far as its form tells. One that is no day of the calendar in any order is a reference number. */
function mayBeDay(text: string): boolean {
  if (!otherDate.test(text)) return false;
  const orders = ordersOfDate(text);
  return orders === null || orders.dayFirst || orders.monthFirst;
}

/** What kind of values a column holds, from its distinct texts without the missing ones. */
export function judgeKind(values: readonly Counted[], reader: NumberReader): JudgedKind {
  const total = sum(values);
  if (total === 0) return { kind: 'categorical', against: null, flags: [] };
  const notNumbers = values.filter(({ text }) => Number.isNaN(reader.read(text)));
  const numeric = judgeNumbers(total, notNumbers, reader);
  if (numeric !== null) {
    const question = thousandsFlag(reader.format, (ask) => values.every(({ text, count }) => Number.isNaN(reader.read(text)) || ask(text, count)));
    return question === null ? numeric : { ...numeric, flags: [...numeric.flags, question] };
  }
  const odd = sum(notNumbers);
  const notDates = values.filter(({ text }) => !isIsoDate(text));
  const oddDates = sum(notDates);
  if (total - oddDates >= mostlyNumbers * total) {
    if (oddDates === 0) return { kind: 'date', against: null, flags: [] };
    const finding = `${thin(oddDates)} of ${thin(total)} values are no dates (YYYY-MM-DD): ${listed(notDates)}.`;
    return { kind: 'date', against: finding, flags: [{ code: 'doubtful-dates', weight: 'look', finding }] };
  }
  return { kind: 'categorical', ...doubtful(values, total, total - odd, reader) };
}

/** Whether a column of `total` values that are not missing is one of numbers, by those that are none; null if it is something else. */
export function judgeNumbers(total: number, notNumbers: readonly Counted[], reader: NumberReader): JudgedKind | null {
  const odd = sum(notNumbers);
  if (odd === 0) return { kind: 'numeric', against: null, flags: [] };
  // NaN, Inf, 0x10 and the like stand where numbers were meant: they are counted, and make no category.
  const words = sum(notNumbers.filter(({ text }) => reader.fault(text) === 'text'));
  if (odd < total && total - words >= mostlyNumbers * total) {
    const finding = `${thin(odd)} of ${thin(total)} values are no numbers: ${listed(notNumbers, (text) => ` (${faultWords[reader.fault(text)]})`)}.`;
    return {
      kind: 'numeric',
      against: finding,
      flags: [{ code: 'unreadable-numbers', weight: 'look', finding, values: mayBeMissing(notNumbers) }],
    };
  }
  return null;
}

/**
 * What is to be asked of a numeric column whose decimal sign may be its thousands sign. Where a thousands sign is stated, the question is answered
 * for the whole file.
 * @param each gives every number as it is spelled and its rows, as long as there is a question
 */
export function thousandsFlag(format: NumberFormat, each: (ask: (text: string, count: number) => boolean) => boolean): ColumnFlag | null {
  if (format.thousands !== null) return null;
  const question = new ThousandsQuestion(format.decimal);
  if (!each((text, count) => question.add(text, count))) return null;
  const other = question.other();
  if (other === null) return null;
  const { text } = question.examples[0];
  const listed = question.examples.map((one) => `“${one.text}” ${thin(one.count)}×`).join(', ');
  const finding =
    `“${text}” is read as ${numberReader(format).read(text)} and may be ${thin(numberReader(other).read(text))}: each of the ${thin(question.rows)} values with “${format.decimal}” has exactly three digits after it (${listed}). ` +
    `If it parts thousands, read the file again with “${format.decimal}” as thousands sign and “${other.decimal}” as decimal sign; if these are decimals, accept this.`;
  return { code: 'ambiguous-numbers', weight: 'look', finding };
}

/** A column of texts that look like something else: numbers written otherwise, dates in an order that has to be asked for. */
function doubtful(values: readonly Counted[], total: number, numbers: number, reader: NumberReader): Omit<JudgedKind, 'kind'> {
  const dates = values.filter(({ text }) => mayBeDay(text));
  if (sum(dates) >= mostlyNumbers * total) {
    const pairs = dates.map(({ text }) => otherDate.exec(text)).map((match) => [Number(match?.[1]), Number(match?.[2])]);
    const dayFirst = pairs.some(([first]) => first > 12);
    const monthFirst = pairs.some(([, second]) => second > 12);
    const order =
      dayFirst && !monthFirst
        ? 'with the day first'
        : monthFirst && !dayFirst
          ? 'with the month first'
          : 'day first or month first cannot be told';
    const twoDigits = dates.some(({ text }) => /\D\d{2}$/.test(text));
    const next = twoDigits
      ? 'To use them as dates, write the year with four digits in the file'
      : 'To use them as dates, read the file again with their date order; where other columns have another order, write them as YYYY-MM-DD in the file and bring it in again';
    const finding = `Dates such as ${dates[0].text} (${order}). ${next}.`;
    return { against: finding, flags: [{ code: 'doubtful-dates', weight: 'look', finding }] };
  }
  const times = values.filter(({ text }) => looksLikeDateTime(text));
  if (sum(times) >= mostlyNumbers * total) {
    const finding = `Dates with a time such as ${times[0].text}. To use them as dates, read the file again with its dates with a time as days, as the preview proposes, or write the day alone in the file (YYYY-MM-DD) and bring it in again.`;
    return { against: finding, flags: [{ code: 'doubtful-dates', weight: 'look', finding }] };
  }
  const amounts = values.filter(({ text }) => looksLikeAmount(text));
  // Beside such amounts stand plain ones, as 0 beside (12).
  if (amounts.length > 0 && sum(amounts) + sum(values.filter(({ text }) => isNumberSomehow(text))) >= mostlyNumbers * total && sum(amounts) * 2 >= total) {
    const finding = `Amounts with signs around the number (${listed(amounts, undefined, 3)}). To use them as numbers, write the number alone in the file, with - for what is negative, and bring it in again.`;
    return { against: finding, flags: [{ code: 'numbers-as-text', weight: 'look', finding }] };
  }
  const judged = judgeFormat(
    values.map(({ text }) => text),
    values.map(({ count }) => count),
  );
  if (judged.numbers >= mostlyNumbers * total) {
    const { decimal, thousands } = judged.format;
    const sign =
      thousands === null
        ? ''
        : ` and “${thousands === '\u00a0' || thousands === '\u202f' ? 'narrow blank' : thousands}” between thousands`;
    const example = values.find(({ text }) => Number.isNaN(reader.read(text)))?.text ?? '';
    const other = judged.ambiguous;
    if (other !== null) {
      // Both at once: whoever follows one advice must not learn afterwards that it was a guess.
      const [one, two] = [judged.format, other].map((format) => thin(numberReader(format).read(example)));
      const finding =
        `Numbers such as “${example}”: ${one} where “${decimal}” is the decimal sign, and ${two} where it parts thousands. Each value with “${decimal}” has exactly three digits after it, so that the file does not say which. ` +
        `Change the reading choices to use them as numbers: “${decimal}” as decimal sign, or “${decimal}” as thousands sign with “${other.decimal}” as decimal sign.`;
      return { against: finding, flags: [{ code: 'numbers-as-text', weight: 'look', finding }] };
    }
    const finding = `Numbers written with “${decimal}” as decimal sign${sign} (${example}): change the reading choices to use them as numbers.`;
    return { against: finding, flags: [{ code: 'numbers-as-text', weight: 'look', finding }] };
  }
  const spelled = values.filter(({ text }) => isNumberSomehow(text));
  if (sum(spelled) >= mostlyNumbers * total) {
    const best = numberReader(judged.format);
    const [one, other] = [true, false].map((read) => spelled.filter(({ text }) => Number.isNaN(best.read(text)) !== read));
    const finding = `Numbers are written in more than one way: ${listed(one, undefined, 3)} beside ${listed(other, undefined, 3)}. Write them in one way in the file and bring it in again, or do not use the column.`;
    return { against: finding, flags: [{ code: 'mixed-numbers', weight: 'stop', finding }] };
  }
  if (numbers * 2 >= total) {
    const texts = values.filter(({ text }) => Number.isNaN(reader.read(text)));
    const finding = `${thin(numbers)} of ${thin(total)} values are numbers, the others are not: ${listed(texts)}.`;
    return { against: finding, flags: [{ code: 'numbers-as-text', weight: 'look', finding, values: mayBeMissing(texts) }] };
  }
  return { against: null, flags: [] };
}

const sum = (values: readonly Counted[]): number => values.reduce((total, { count }) => total + count, 0);

const byFrequency = (a: Counted, b: Counted): number => b.count - a.count || (a.text < b.text ? -1 : 1);

function listed(values: readonly Counted[], more: (text: string) => string = () => '', most = 8): string {
  const sorted = [...values].sort(byFrequency);
  const shown = sorted.slice(0, most).map(({ text, count }) => `${JSON.stringify(text.slice(0, 40))}${more(text)} ${thin(count)}×`);
  return shown.join(', ') + (sorted.length > most ? ` and ${thin(sorted.length - most)} more` : '');
}

/** Texts that can be named as missing tokens: a number in another spelling is a number, and a token has at most 100 characters. */
function mayBeMissing(notNumbers: readonly Counted[]): string[] {
  const tokens = notNumbers.filter(({ text }) => text.length <= 100 && !isNumberSomehow(text));
  return tokens.sort(byFrequency).slice(0, 20).map(({ text }) => text);
}

export { thin };
