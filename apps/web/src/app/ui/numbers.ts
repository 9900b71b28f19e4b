/**
 * How numbers are written, everywhere: thousands parted by a narrow no-break space, the minus sign U+2212, an en dash where there is no
 * value (a dash is not 0). Each function takes null, undefined and NaN.
 */
export const MINUS = '\u2212';
export const THIN_SPACE = '\u202F';
export const DASH = '\u2013';

type Maybe = number | null | undefined;

/** Fixed decimals: fixed(1234.5, 1) = "1 234.5", fixed(-0.224, 2) = "−0.22". A value that rounds to zero carries no minus. */
export function fixed(value: Maybe, decimals: number): string {
  if (value === null || value === undefined || Number.isNaN(value)) return DASH;
  if (!Number.isFinite(value)) return value > 0 ? '\u221E' : `${MINUS}\u221E`;
  const text = Math.abs(value).toFixed(decimals);
  const [whole, fraction] = text.split('.');
  const grouped = whole.replace(/\B(?=(\d{3})+(?!\d))/g, THIN_SPACE);
  const negative = value < 0 && /[1-9]/.test(text);
  return (negative ? MINUS : '') + grouped + (fraction === undefined ? '' : `.${fraction}`);
}

/** AUC, Gini, KS, Brier score: three decimals. */
export const metric = (value: Maybe): string => fixed(value, 3);
/** WOE, IV, log odds: two decimals. */
export const woe = (value: Maybe): string => fixed(value, 2);
/** Points: whole. */
export const points = (value: Maybe): string => fixed(value, 0);
/** Rows, goods, bads: whole, thousands parted. */
export const count = (value: Maybe): string => fixed(value, 0);

/** A share of 0 to 1 in per cent: share(0.141) = "14.1 %". */
export function share(value: Maybe, decimals = 1): string {
  const text = fixed(value === null || value === undefined ? value : value * 100, decimals);
  return text === DASH ? DASH : `${text}${THIN_SPACE}%`;
}

/** Significant digits, for penalties and p-values: significant(0.0095123, 2) = "0.0095", significant(4.2e-13, 1) = "4e−13". */
export function significant(value: Maybe, digits = 3): string {
  if (value === null || value === undefined || Number.isNaN(value)) return DASH;
  if (value === 0) return '0';
  const size = Math.abs(value);
  if (!Number.isFinite(value)) return fixed(value, 0);
  if (size < 1e-5 || size >= 1e9)
    return value
      .toExponential(digits - 1)
      .replace('e+', 'e')
      .replaceAll('-', MINUS);
  const decimals = Math.max(0, digits - 1 - Math.floor(Math.log10(size)));
  return fixed(value, Math.min(decimals, 20));
}

/** A difference with its sign: signed(0.0004, 4) = "+0.0004". */
export function signed(value: Maybe, decimals: number): string {
  const text = fixed(value, decimals);
  return text !== DASH && (value as number) > 0 && /[1-9\u221E]/.test(text) ? `+${text}` : text;
}

/** Bytes for people, in decimal units: bytes(107_000_000) = "107 MB". */
export function bytes(value: Maybe): string {
  if (value === null || value === undefined || Number.isNaN(value)) return DASH;
  const units = ['bytes', 'kB', 'MB', 'GB', 'TB'];
  let size = value;
  let unit = 0;
  while (size >= 1000 && unit < units.length - 1) {
    size /= 1000;
    unit += 1;
  }
  return `${fixed(size, unit === 0 || size >= 100 ? 0 : 1)}${THIN_SPACE}${units[unit]}`;
}

/** Time for people: duration(75) = "1 min 15 s". */
export function duration(seconds: Maybe): string {
  if (seconds === null || seconds === undefined || Number.isNaN(seconds)) return DASH;
  const whole = Math.max(0, Math.round(seconds));
  if (whole < 60) return `${whole}${THIN_SPACE}s`;
  if (whole < 3600) return `${Math.floor(whole / 60)}${THIN_SPACE}min ${whole % 60}${THIN_SPACE}s`;
  return `${Math.floor(whole / 3600)}${THIN_SPACE}h ${Math.floor((whole % 3600) / 60)}${THIN_SPACE}min`;
}

/** A p-value with its sign of relation: pValue(0.0421) = "p = 0.042"; below a thousandth the exact figure says nothing more. */
export function pValue(value: Maybe): string {
  if (value === null || value === undefined || Number.isNaN(value)) return DASH;
  return value < 0.001 ? 'p < 0.001' : `p = ${significant(value, 2)}`;
}

const numeral = String.raw`-?\d+(?:\.\d+)?(?:e[+-]?\d+)?`;
const range = new RegExp(`^(?:(?:under|up to|over) ${numeral}|${numeral} and over|(?:over )?${numeral} to (?:under )?${numeral})$`);

/** A number that comes as text, its digits kept: written('-12450.50') = "−12 450.50". Any other text stays as it is. */
export function written(value: number | string): string {
  const text = String(value);
  if (!new RegExp(`^${numeral}$`).test(text)) return text;
  const [mantissa, ...exponent] = text.split('e');
  const [whole, ...fraction] = mantissa.split('.');
  const grouped = whole.replace(/\B(?=(\d{3})+(?!\d))/g, THIN_SPACE);
  return [[grouped, ...fraction].join('.'), ...exponent].join('e').replace('e+', 'e').replaceAll('-', MINUS);
}

/** A bin may hold hundreds of categories: of so long a label the first names stand, as far as they fit into this many characters. */
const longLabel = 240;
const namesShown = 120;

/**
 * The label of a bin, as results state it, with its numbers as they are read: "-244 to under 1250" is "−244 to under 1 250". Categories stay, the first
 * of very many: "Alderholm, Brack and others".
 */
export function binWords(label: string): string {
  if (range.test(label)) return label.replace(new RegExp(numeral, 'g'), written);
  const end = label.length > longLabel ? label.lastIndexOf(', ', namesShown) : -1;
  return end > 0 ? `${label.slice(0, end)} and others` : label;
}

/** A sentence in which every number is a value: "Cut moved from 18762.23 to -244" is "Cut moved from 18 762.23 to −244". */
export const valueWords = (sentence: string): string =>
  sentence.replace(new RegExp(`(?<![\\w.,-])${numeral}(?![\\w-])`, 'g'), written);

const dateFormat = new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'long', year: 'numeric' });
const momentFormat = new Intl.DateTimeFormat('en-GB', {
  day: 'numeric',
  month: 'short',
  year: 'numeric',
  hour: '2-digit',
  minute: '2-digit',
});

/** A date stays on one line: its blanks do not break. */
const unbroken = (text: string): string => text.replaceAll(' ', '\u00A0');

/** "3 November 2026"; the day in this browser's time zone. */
export function day(iso: string | null | undefined): string {
  return iso ? unbroken(dateFormat.format(new Date(iso))) : DASH;
}

/** "3 Nov 2026, 14:05"; the time in this browser's time zone. */
export function moment(iso: string | null | undefined): string {
  return iso ? momentFormat.format(new Date(iso)).split(', ').map(unbroken).join(', ') : DASH;
}

/** "1 characteristic", "8 characteristics". */
export function plural(n: number, one: string, many = `${one}s`): string {
  return `${count(n)} ${n === 1 ? one : many}`;
}
