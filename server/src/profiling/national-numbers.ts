import type { PersonalKind } from './personal-values';

/**
 * National identification numbers that have check digits, or a form that nothing else has. Forms and rules are those of the issuing authorities, from memory;
 * the specs hold each to a number that its authority gives as an example. Numbers of nine digits alone (Dutch, Canadian, American ones) are not looked for:
 * too many amounts and dates have that form.
 */

const digitsOf = (piece: string): number[] => [...piece.replace(/\D/g, '')].map(Number);
const weighted = (digits: readonly number[], weights: readonly number[]): number =>
  weights.reduce((sum, weight, place) => sum + weight * digits[place], 0);

/** Day and month from 1; the century does not matter. */
const isDay = (month: number, day: number): boolean => month >= 1 && month <= 12 && day >= 1 && day <= 31;

const dniLetters = 'TRWAGMYFPDXBNJZSQVHLCKE';

/** Spain: the number, X, Y, Z as 0, 1, 2, leaves the place of its letter when divided by 23. */
function isDni(piece: string): boolean {
  const compact = piece.replace(/[^\dA-Z]/g, '');
  const number = compact.slice(0, -1).replace('X', '0').replace('Y', '1').replace('Z', '2');
  return dniLetters[Number(number) % 23] === compact.at(-1);
}

const oddValues = [1, 0, 5, 7, 9, 13, 15, 17, 19, 21, 2, 4, 18, 20, 11, 3, 6, 8, 12, 14, 16, 10, 22, 25, 24, 23];

/** Italy: characters at odd places have values of a table, those at even places their place; the sum modulo 26 is the last letter. */
function isCodiceFiscale(piece: string): boolean {
  let sum = 0;
  for (let place = 0; place < 15; place++) {
    const value = Number.parseInt(piece[place], 36);
    const order = value >= 10 ? value - 10 : value;
    sum += place % 2 === 0 ? oddValues[order] : order;
  }
  return 'ABCDEFGHIJKLMNOPQRSTUVWXYZ'[sum % 26] === piece[15];
}

/** Poland: a date, with 20, 40, 60 or 80 added to the month outside of 1900 to 1999, and a check digit by weights 1, 3, 7, 9. */
function isPesel(piece: string): boolean {
  const digits = digitsOf(piece);
  if (!isDay((digits[2] * 10 + digits[3]) % 20, digits[4] * 10 + digits[5])) return false;
  return (10 - (weighted(digits, [1, 3, 7, 9, 1, 3, 7, 9, 1, 3]) % 10)) % 10 === digits[10];
}

/** France: the number and its key leave 0 together when divided by 97: key = 97 - number mod 97; Corsica's 2A and 2B count as 19 and 18. */
function isNir(piece: string): boolean {
  const compact = piece.replace(/\s/g, '');
  const number = BigInt(compact.slice(0, 13).replace('2A', '19').replace('2B', '18'));
  return 97n - (number % 97n) === BigInt(compact.slice(13));
}

/** Sweden: a date and the check digit of Luhn over ten digits. */
function isPersonnummer(piece: string): boolean {
  const digits = digitsOf(piece).slice(-10);
  return isDay(digits[2] * 10 + digits[3], digits[4] * 10 + digits[5]) && luhn(digits);
}

/** Switzerland: the check digit of an EAN-13 (GS1). */
const isAhv = (piece: string): boolean => weighted(digitsOf(piece), [1, 3, 1, 3, 1, 3, 1, 3, 1, 3, 1, 3, 1]) % 10 === 0;

/** Brazil: two check digits, each modulo 11 of those before it. */
function isCpf(piece: string): boolean {
  const digits = digitsOf(piece);
  const check = (count: number): number => {
    const rest =
      (weighted(
        digits,
        Array.from({ length: count }, (_, place) => count + 1 - place),
      ) *
        10) %
      11;
    return rest === 10 ? 0 : rest;
  };
  return new Set(digits).size > 1 && check(9) === digits[9] && check(10) === digits[10];
}

/** Germany, tax identification: ISO/IEC 7064 mod 11,10; of the first ten digits one is there twice or three times. */
function isSteuerId(piece: string): boolean {
  const digits = digitsOf(piece);
  if (![8, 9].includes(new Set(digits.slice(0, 10)).size)) return false;
  let product = 10;
  for (let place = 0; place < 10; place++) {
    const sum = (digits[place] + product) % 10 || 10;
    product = (sum * 2) % 11;
  }
  return (11 - product) % 10 === digits[10];
}

function luhn(digits: readonly number[]): boolean {
  const sum = digits.reduce((total, digit, place) => {
    const doubled = (digits.length - place) % 2 === 0 ? digit * 2 : digit;
    return total + (doubled > 9 ? doubled - 9 : doubled);
  }, 0);
  return sum % 10 === 0;
}

const multiply = [
  [0, 1, 2, 3, 4, 5, 6, 7, 8, 9], [1, 2, 3, 4, 0, 6, 7, 8, 9, 5], [2, 3, 4, 0, 1, 7, 8, 9, 5, 6], [3, 4, 0, 1, 2, 8, 9, 5, 6, 7], [4, 0, 1, 2, 3, 9, 5, 6, 7, 8],
  [5, 9, 8, 7, 6, 0, 4, 3, 2, 1], [6, 5, 9, 8, 7, 1, 0, 4, 3, 2], [7, 6, 5, 9, 8, 2, 1, 0, 4, 3], [8, 7, 6, 5, 9, 3, 2, 1, 0, 4], [9, 8, 7, 6, 5, 4, 3, 2, 1, 0],
]; // prettier-ignore
const permute = [
  [0, 1, 2, 3, 4, 5, 6, 7, 8, 9], [1, 5, 7, 6, 2, 8, 3, 0, 9, 4], [5, 8, 0, 3, 7, 9, 6, 1, 4, 2], [8, 9, 1, 6, 0, 4, 3, 5, 2, 7],
  [9, 4, 5, 3, 1, 2, 6, 8, 7, 0], [4, 2, 8, 6, 5, 7, 3, 9, 0, 1], [2, 7, 9, 3, 8, 0, 6, 4, 1, 5], [7, 0, 4, 6, 9, 1, 3, 2, 5, 8],
]; // prettier-ignore

/** India: the check digit of J. Verhoeff, Error Detecting Decimal Codes, 1969. */
function isAadhaar(piece: string): boolean {
  const digits = digitsOf(piece).reverse();
  return digits.reduce((check, digit, place) => multiply[check][permute[place % 8][digit]], 0) === 0;
}

export const nationalNumbers: readonly PersonalKind[] = [
  {
    kind: 'Spanish identity numbers',
    standard: 'DNI and NIE, with their letter',
    form: /(?<![\dA-Z])(?:[XYZ]-?\d{7}|\d{8})-?[A-HJ-NP-TV-Z](?![\dA-Z])/g,
    holds: isDni,
  },
  {
    kind: 'Italian tax codes',
    standard: 'codice fiscale, with its check letter',
    form: /(?<![\dA-Z])[A-Z]{6}\d{2}[A-EHLMPRST]\d{2}[A-Z]\d{3}[A-Z](?![\dA-Z])/g,
    holds: isCodiceFiscale,
  },
  {
    kind: 'Polish identity numbers',
    standard: 'PESEL, date and check digit',
    form: /(?<![\d.,-])\d{11}(?![\d-]|[.,]\d)/g,
    asNumbers: true,
    holds: isPesel,
  },
  {
    kind: 'German tax numbers',
    standard: 'Steuer-Identifikationsnummer, check digit of ISO/IEC 7064 mod 11,10',
    form: /(?<![\d.,-])[1-9]\d(?: ?)\d{3}(?: ?)\d{3}(?: ?)\d{3}(?![\d-]|[.,]\d)/g,
    asNumbers: true,
    holds: isSteuerId,
  },
  {
    kind: 'French social security numbers',
    standard: 'NIR, with its key',
    form: /(?<![\d.,-])[1-478] ?\d{2} ?\d{2} ?(?:\d{2}|2[AB]) ?\d{3} ?\d{3} ?\d{2}(?![\d-]|[.,]\d)/g,
    asNumbers: true,
    holds: isNir,
  },
  {
    kind: 'Swedish identity numbers',
    standard: 'personnummer, date and check digit of Luhn',
    form: /(?<![\d.,-])(?:19|20)?\d{6}[-+]\d{4}(?![\d.,-])/g,
    holds: isPersonnummer,
  },
  {
    kind: 'Swiss social security numbers',
    standard: 'AHV number, check digit of GS1',
    form: /(?<!\d)756\.?\d{4}\.?\d{4}\.?\d{2}(?!\d)/g,
    asNumbers: true,
    holds: isAhv,
  },
  {
    kind: 'Brazilian tax numbers',
    standard: 'CPF, two check digits',
    form: /(?<!\d)\d{3}\.\d{3}\.\d{3}-\d{2}(?!\d)/g,
    holds: isCpf,
  },
  {
    kind: 'Canadian social insurance numbers',
    standard: 'SIN, check digit of Luhn',
    form: /(?<![\d-])\d{3}([ -])\d{3}\1\d{3}(?![\d-]|[ ]\d)/g,
    holds: (piece) => luhn(digitsOf(piece)),
  },
  {
    kind: 'Indian identity numbers',
    standard: 'Aadhaar, check digit of Verhoeff',
    form: /(?<![\d-])[2-9]\d{3}([ -])\d{4}\1\d{4}(?![\d-]|[ ]\d)/g,
    holds: isAadhaar,
  },
];
