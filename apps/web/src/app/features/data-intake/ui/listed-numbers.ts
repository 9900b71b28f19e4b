import { readListed, readNumber } from './listed-values';

/** How numbers are written in a file. */
export interface NumberSigns {
  readonly decimal: '.' | ',';
  readonly thousands: string | null;
}

/** A comma with a digit on either side may belong to a number. */
const withCommas = /^(?:[^,]|(?<=\d),(?=\d))*/;

/**
 * Numbers in one field as the texts that a column has for them: a rule compares texts, and whoever types 3 or 1.5 means 3,0 and 1,5 too. Where a comma
 * stands in numbers, one between two digits is part of a number unless the column has the numbers on both sides of it.
 *
 * @param texts those of the column, as far as they are known
 * @returns null where it cannot be told which numbers are meant
 * @example readListedNumbers('1,5, 3', { decimal: ',', thousands: null }, ['1,5', '3,0']) // ['1,5', '3,0']
 */
export function readListedNumbers(typed: string, signs: NumberSigns, texts: readonly string[]): string[] | null {
  const hasCommas = signs.decimal === ',' || signs.thousands === ',';
  const parted = hasCommas && !typed.includes('"') ? typed.replaceAll(';', ', ') : typed;
  const tokens = hasCommas ? readListed(parted, withCommas) : readListed(parted);
  if (!tokens) return null;
  const taken = new Set<string>();
  for (const token of tokens) {
    const found = textsFor(token, signs, texts);
    if (!found) return null;
    for (const text of found) taken.add(text);
  }
  return [...taken];
}

function textsFor(token: string, signs: NumberSigns, texts: readonly string[]): string[] | null {
  const asWritten = numberIn(token, signs);
  const number = asWritten ?? readNumber(token);
  const held = number === null ? [] : texts.filter((text) => numberIn(text, signs) === number);
  if (held.length > 0) return held;
  if (texts.includes(token)) return [token];
  if (/\d,\d/.test(token)) {
    const parts = token.split(',').map((part) => textsFor(part, signs, texts));
    const known = parts.flatMap((part) => part ?? []);
    if (parts.every((part) => part !== null) && known.every((text) => texts.includes(text))) return known;
    if (number === null) return null;
  }
  if (number === null || asWritten !== null) return [token];
  return [String(number).replace('.', signs.decimal)];
}

/** A number as it is written in the file; null for what is none there. */
function numberIn(text: string, { decimal, thousands }: NumberSigns): number | null {
  const plain = thousands !== null && /^[+-]?\d{1,3}(\D\d{3})+(\D\d+)?$/.test(text) ? text.replaceAll(thousands, '') : text;
  const read = decimal === ',' ? (plain.includes('.') ? '' : plain.replace(',', '.')) : plain;
  return /^[+-]?\d+(\.\d+)?(e[+-]?\d+)?$/i.test(read) ? Number(read) : null;
}
