/**
 * The grammar of a number in a file: an optional sign, digits, decimal sign and digits, an optional exponent; a thousands sign only
 * where one is stated, and then in groups of three. Nothing else: no hexadecimal, no Inf, no NaN, no blanks inside, no digits
 * of other scripts. A number too large or too small for a double is not a number either; it never becomes Infinity or zero.
 */

export interface NumberFormat {
  decimal: '.' | ',';
  thousands: string | null;
}

export type NumberFault =
  'empty' | 'blank' | 'not-a-number-word' | 'infinity' | 'hexadecimal' | 'too-large' | 'too-small' | 'other-digits' | 'text';

export interface NumberReader {
  readonly format: NumberFormat;
  /** NaN if the text is not a number. Minus zero reads as zero. */
  read(text: string): number;
  /** Why `read` gave NaN. */
  fault(text: string): NumberFault;
}

const escaped = (sign: string): string => sign.replace(/[\\^$.*+?()[\]{}|/-]/g, '\\$&');

/** An apostrophe stands between thousands as it is typed (U+0027) or typeset (U+2019): programs write one for the other, and no other sign is meant. */
const apostrophes = "'\u2019";
const signsOf = (thousands: string): string => (apostrophes.includes(thousands) ? `[${apostrophes}]` : escaped(thousands));

/**
 * @example
 * numberReader({ decimal: ',', thousands: '.' }).read('1.234,5') // 1234.5
 */
export function numberReader(format: NumberFormat): NumberReader {
  const { decimal, thousands } = format;
  const whole = thousands === null ? '[0-9]+' : `(?:[0-9]{1,3}(?:${signsOf(thousands)}[0-9]{3})+|[0-9]+)`;
  const parting = thousands === null ? null : new RegExp(signsOf(thousands), 'g');
  const grammar = new RegExp(`^[+-]?${whole}(?:${escaped(decimal)}[0-9]+)?(?:[eE][+-]?[0-9]+)?$`);
  const parse = (text: string): number => {
    let plain = text;
    if (parting !== null) plain = plain.replace(parting, '');
    if (decimal !== '.') plain = plain.replace(decimal, '.');
    return Number(plain);
  };
  const vanished = (value: number, text: string): boolean => value === 0 && /[1-9]/.test(text.replace(/[eE].*$/, ''));
  return {
    format,
    read(text) {
      if (!grammar.test(text)) return NaN;
      const value = parse(text);
      if (!Number.isFinite(value) || vanished(value, text)) return NaN;
      return value === 0 ? 0 : value;
    },
    fault(text) {
      if (text === '') return 'empty';
      if (text.trim() === '') return 'blank';
      if (grammar.test(text)) return Number.isFinite(parse(text)) ? 'too-small' : 'too-large';
      if (/^[+-]?nan$/i.test(text)) return 'not-a-number-word';
      if (/^[+-]?(inf|infinity|∞)$/i.test(text)) return 'infinity';
      if (/^[+-]?0x[0-9a-f]+$/i.test(text)) return 'hexadecimal';
      if (/(?![0-9])\p{Nd}/u.test(text) && /^[\p{Nd}.,+\s-]+$/u.test(text)) return 'other-digits';
      return 'text';
    },
  };
}

/** What a column's texts say about the way numbers are written in it. */
export interface FormatJudgement {
  format: NumberFormat;
  /** Rows that are numbers in this format. */
  numbers: number;
  /** Rows that are not, and are not empty. */
  others: number;
  /** At most five texts that are not. */
  examples: string[];
  /** Another way of reading takes as many texts but gives other values ("1,234"): to be confirmed by a person. */
  ambiguous: NumberFormat | null;
}

const FORMATS: readonly NumberFormat[] = [
  { decimal: '.', thousands: null },
  { decimal: ',', thousands: null },
  { decimal: '.', thousands: ',' },
  { decimal: ',', thousands: '.' },
  { decimal: '.', thousands: ' ' },
  { decimal: ',', thousands: ' ' },
  { decimal: '.', thousands: "'" },
  { decimal: ',', thousands: "'" },
  { decimal: '.', thousands: '\u00a0' },
  { decimal: ',', thousands: '\u00a0' },
  { decimal: '.', thousands: '\u202f' },
  { decimal: ',', thousands: '\u202f' },
];

const readers = FORMATS.map(numberReader);

/** Whether a text is a number in any of the formats that a column is judged by. */
export const isNumberSomehow = (text: string): boolean => readers.some((reader) => !Number.isNaN(reader.read(text)));

/**
 * Whether the decimal sign of a column of numbers may be its thousands sign. It may where each number that has the sign has one to three digits before
 * it, which begin with no zero, and exactly three after it, and where no other number is so large that it would have the sign too: "1.234" beside "990".
 * Numbers in nines do not count as large: they are codes, which are written as codes are whatever the amounts beside them. "0.123" is a decimal.
 */
export class ThousandsQuestion {
  /** Rows of numbers with the sign, as long as it is a question. */
  rows = 0;
  /** The most frequent of them, those of one count in the order of their texts. */
  readonly examples: { readonly text: string; readonly count: number }[] = [];
  private readonly small = /^[+-]?(?:0|[1-9][0-9]{0,2}|9{4,})$/;
  private readonly either: RegExp;
  private answered = false;

  constructor(readonly decimal: NumberFormat['decimal']) {
    this.either = new RegExp(`^[+-]?[1-9][0-9]{0,2}${escaped(decimal)}[0-9]{3}$`);
  }

  /**
   * @param text a number in the format of the column; @param count rows that hold it
   * @returns whether there still is a question
   */
  add(text: string, count: number): boolean {
    if (this.answered) return false;
    if (this.either.test(text)) {
      this.rows += count;
      const { examples } = this;
      let place = examples.length;
      while (
        place > 0 &&
        (count > examples[place - 1].count || (count === examples[place - 1].count && text < examples[place - 1].text))
      )
        place--;
      if (place < mostExamples) {
        examples.splice(place, 0, { text, count });
        if (examples.length > mostExamples) examples.pop();
      }
    } else if (!this.small.test(text)) this.answered = true;
    return !this.answered;
  }

  /** The other way to read the column, or null where the numbers leave no question. */
  other(): NumberFormat | null {
    if (this.answered || this.rows === 0) return null;
    return { decimal: this.decimal === '.' ? ',' : '.', thousands: this.decimal };
  }
}

const mostExamples = 3;

/**
 * Judges a whole column, not its first cells.
 * @param texts distinct texts; @param rows rows of each (default: one each)
 */
export function judgeFormat(texts: readonly string[], rows?: ArrayLike<number>): FormatJudgement {
  const count = (index: number): number => rows?.[index] ?? 1;
  const judged = readers.map((reader) => {
    let numbers = 0;
    texts.forEach((text, index) => {
      if (!Number.isNaN(reader.read(text))) numbers += count(index);
    });
    return { reader, numbers };
  });
  const best = judged.reduce((a, b) => (b.numbers > a.numbers ? b : a));
  const { format } = best.reader;
  const question = new ThousandsQuestion(format.decimal);
  let others = 0;
  const examples: string[] = [];
  texts.forEach((text, index) => {
    if (!Number.isNaN(best.reader.read(text))) question.add(text, count(index));
    else if (text !== '') {
      others += count(index);
      if (examples.length < 5) examples.push(text);
    }
  });
  return { format, numbers: best.numbers, others, examples, ambiguous: question.other() };
}
