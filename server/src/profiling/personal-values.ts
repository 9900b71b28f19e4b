import { nationalNumbers } from './national-numbers';

/**
 * Values that look like personal data wherever they stand in a text, over all rows of a column. What is found is a warning that somebody
 * answers: a format can fit by chance. Each kind names the standard whose form, and check digits where it has them, are looked at.
 */

/** What was found of one kind. */
export interface PersonalValuesFound {
  readonly kind: string;
  readonly standard: string;
  readonly rows: number;
  /** Written as a number may be written: what is counted of the numbers of the column is counted of these. */
  readonly asNumbers: boolean;
}

export interface PersonalKind {
  /** In the plural, as a finding says it. */
  readonly kind: string;
  readonly standard: string;
  readonly form: RegExp;
  readonly asNumbers?: true;
  /** Of a piece of text that has the form; without it the form decides. */
  readonly holds?: (piece: string) => boolean;
}

/** With check digits some of any numbers fit by chance, 1 in 10 or 1 in 97: a column is one of them where at least so many that have the form fit. */
const leastHolding = 0.5;

const kinds: readonly PersonalKind[] = [
  ...nationalNumbers,
  {
    kind: 'e-mail addresses',
    standard: 'RFC 5322, section 3.4.1',
    // The dot-atom form without quoted parts; a domain of two labels or more.
    form: /(?<![\w.%+-])[\w.%+-]{1,64}@(?:[a-z0-9](?:[a-z0-9-]{0,61}[a-z0-9])?\.)+\p{L}{2,}/giu,
  },
  {
    kind: 'bank accounts (IBAN)',
    standard: 'ISO 13616, check digits of ISO/IEC 7064 mod 97-10',
    form: /(?<![A-Za-z0-9])[A-Z]{2}\d{2}(?:[A-Z0-9]{11,30}|(?: [A-Z0-9]{4}){2,7}(?: [A-Z0-9]{1,4})?)(?![A-Za-z0-9])/g,
    holds: (piece) => isIban(piece),
  },
  {
    kind: 'payment cards',
    standard: 'ISO/IEC 7812, check digit of Luhn',
    // Issuers of payment cards begin with 3 to 6, or 22 to 27; in one piece, in fours, or 4-6-5.
    form: /(?<![\d+-]|\d[.,])(?:[3-6]\d|2[2-7])(?:\d{11,17}|\d{2}(?:([ -])\d{4}\1\d{4}\1\d{4}(?:\1\d{1,3})?|([ -])\d{6}\2\d{5}))(?![\d-]|[.,]\d)/g,
    asNumbers: true,
    holds: (piece) => passesLuhn(piece),
  },
  {
    kind: 'National Insurance numbers',
    standard: 'the form of HMRC, National Insurance Manual NIM39110',
    form: /(?<![A-Za-z0-9])(?!BG|GB|KN|NK|NT|TN|ZZ)[A-CEGHJ-PR-TW-Z][A-CEGHJ-NPR-TW-Z] ?\d{2} ?\d{2} ?\d{2} ?[A-D](?![A-Za-z0-9])/g,
  },
  {
    kind: 'US Social Security numbers',
    standard: 'the form of the Social Security Administration',
    form: /(?<![\d-])(?!000|666|9)\d{3}-(?!00)\d{2}-(?!0000)\d{4}(?![\d-])/g,
  },
  {
    kind: 'telephone numbers',
    standard: 'ITU-T E.164',
    // With its plus sign and country code; a signed amount has neither separators nor so many digits.
    form: /(?<![\w+])\+[1-9](?:\d{10,14}|\d{0,2}(?:[ -]?\(\d{1,4}\))?(?:[ -]\d{2,}){1,6})(?!\d|[.,]\d)/g,
    asNumbers: true,
    holds: (piece) => within(8, 15, digitsOf(piece).length),
  },
];

/** Nothing that is shorter can hold any of them. */
const shortest = 6;
/** Digits that a text has at least, where it has no @. */
const fewestDigits = 6;
/** Digits that a text of digits alone has at least: those of national numbers and of payment cards. */
const digitsAlone = 11;

/**
 * Counts over the texts of a column, in any order.
 *
 * @example
 * const values = new PersonalValues();
 * values.add('asked at ada@saltmarsh.example', 3);
 * values.found(); // [{ kind: 'e-mail addresses', standard: 'RFC 5322, section 3.4.1', rows: 3, asNumbers: false }]
 */
export class PersonalValues {
  private readonly counts = kinds.map(() => ({ rows: 0, having: 0, holding: 0 }));

  /** @param rows rows that hold the text */
  add(text: string, rows: number): void {
    if (!worthLooking(text)) return;
    kinds.forEach(({ form, holds }, place) => {
      const pieces = text.match(form);
      if (!pieces) return;
      const counted = this.counts[place];
      const holding = holds ? pieces.filter((piece) => holds(piece)).length : pieces.length;
      counted.having += pieces.length;
      counted.holding += holding;
      if (holding > 0) counted.rows += rows;
    });
  }

  /** Most rows first. */
  found(): PersonalValuesFound[] {
    return kinds
      .map(({ kind, standard, asNumbers = false }, place) => ({ kind, standard, asNumbers, ...this.counts[place] }))
      .filter(({ rows, having, holding }) => rows > 0 && holding >= leastHolding * having)
      .sort((a, b) => b.rows - a.rows)
      .map(({ kind, standard, rows, asNumbers }) => ({ kind, standard, rows, asNumbers }));
  }
}

/** Most texts of a sample can hold none of them, amounts above all, and a regular expression for each kind would take longer to say so. */
function worthLooking(text: string): boolean {
  if (text.length < shortest) return false;
  let digits = 0;
  let others = 0;
  for (let at = 0; at < text.length; at++) {
    const code = text.charCodeAt(at);
    if (code === 64) return true;
    if (code >= 48 && code <= 57) digits++;
    // A point or a comma, or the sign of an amount.
    else if (code !== 46 && code !== 44 && !(at === 0 && code === 45)) others++;
  }
  return digits >= (others === 0 ? digitsAlone : fewestDigits);
}

const digitsOf = (piece: string): string => piece.replace(/\D/g, '');
const within = (least: number, most: number, value: number): boolean => value >= least && value <= most;

/** ISO 13616: the first four characters to the end, letters as 10 to 35, and the whole leaves 1 when divided by 97 (ISO/IEC 7064). */
export function isIban(piece: string): boolean {
  const compact = piece.replaceAll(' ', '');
  if (!within(15, 34, compact.length)) return false;
  let rest = 0;
  for (const character of compact.slice(4) + compact.slice(0, 4)) {
    const value = Number.parseInt(character, 36);
    rest = (rest * (value > 9 ? 100 : 10) + value) % 97;
  }
  return rest === 1;
}

/** ISO/IEC 7812-1, annex B: from the right every second digit is doubled, the digits of all are added, and 10 divides the sum. */
export function passesLuhn(piece: string): boolean {
  const digits = digitsOf(piece);
  let sum = 0;
  for (let place = 0; place < digits.length; place++) {
    const digit = Number(digits[digits.length - 1 - place]);
    const doubled = place % 2 === 1 ? digit * 2 : digit;
    sum += doubled > 9 ? doubled - 9 : doubled;
  }
  return within(13, 19, digits.length) && sum % 10 === 0;
}
