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
  /** NaN if the text is not a number. Minus zero reads as zero. */
  read(text: string): number;
  /** Why `read` gave NaN. */
  fault(text: string): NumberFault;
}

const escaped = (sign: string): string => sign.replace(/[\\^$.*+?()[\]{}|/-]/g, '\\$&');

/**
 * @example
 * numberReader({ decimal: ',', thousands: '.' }).read('1.234,5') // 1234.5
 */
export function numberReader(format: NumberFormat): NumberReader {
  const { decimal, thousands } = format;
  const whole = thousands === null ? '[0-9]+' : `(?:[0-9]{1,3}(?:${escaped(thousands)}[0-9]{3})+|[0-9]+)`;
  const grammar = new RegExp(`^[+-]?${whole}(?:${escaped(decimal)}[0-9]+)?(?:[eE][+-]?[0-9]+)?$`);
  const parse = (text: string): number => {
    let plain = text;
    if (thousands !== null) plain = plain.replaceAll(thousands, '');
    if (decimal !== '.') plain = plain.replace(decimal, '.');
    return Number(plain);
  };
  const vanished = (value: number, text: string): boolean => value === 0 && /[1-9]/.test(text.replace(/[eE].*$/, ''));
  return {
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
  { decimal: ',', thousands: '\u00a0' },
  { decimal: ',', thousands: '\u202f' },
];

const readers = FORMATS.map(numberReader);

/** Whether a text is a number in any of the formats that a column is judged by. */
export const isNumberSomehow = (text: string): boolean => readers.some((reader) => !Number.isNaN(reader.read(text)));

/**
 * Judges a whole column, not its first cells.
 * @param texts distinct texts; @param rows rows of each (default: one each)
 */
export function judgeFormat(texts: readonly string[], rows?: ArrayLike<number>): FormatJudgement {
  const count = (index: number): number => rows?.[index] ?? 1;
  const judged = FORMATS.map((format) => {
    const reader = numberReader(format);
    let numbers = 0;
    texts.forEach((text, index) => {
      if (!Number.isNaN(reader.read(text))) numbers += count(index);
    });
    return { format, reader, numbers };
  });
  const best = judged.reduce((a, b) => (b.numbers > a.numbers ? b : a));
  const rival = judged.find(
    (other) =>
      other !== best &&
      other.numbers === best.numbers &&
      best.numbers > 0 &&
      texts.some((text) => {
        const [a, b] = [best.reader.read(text), other.reader.read(text)];
        return !Number.isNaN(a) && !Number.isNaN(b) && a !== b;
      }),
  );
  let others = 0;
  const examples: string[] = [];
  texts.forEach((text, index) => {
    if (text === '' || !Number.isNaN(best.reader.read(text))) return;
    others += count(index);
    if (examples.length < 5) examples.push(text);
  });
  return { format: best.format, numbers: best.numbers, others, examples, ambiguous: rival?.format ?? null };
}
