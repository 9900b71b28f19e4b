/**
 * Numbers as the product writes them: three decimals for AUC and KS, two for WOE, whole points, thousands with a thin space (U+202F, which does
 * not break), minus sign U+2212. What is missing is "–", never 0.
 */
export const missing = '–';
const thin = '\u202f';
const minus = '\u2212';

function grouped(digits: string): string {
  return digits.length > 3 ? digits.replace(/\B(?=(\d{3})+$)/g, thin) : digits;
}

/** @example fixed(-1234.567, 2) // "−1234.57" */
export function fixed(value: number | null | undefined, decimals: number): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return missing;
  const text = Math.abs(value).toFixed(decimals);
  const [whole, fraction] = text.split('.');
  const isZero = /^[0.]*$/.test(text);
  return `${value < 0 && !isZero ? minus : ''}${grouped(whole)}${fraction === undefined ? '' : `.${fraction}`}`;
}

export const whole = (value: number | null | undefined): string => fixed(value, 0);
/** A count that weights may have made fractional. */
export const counted = (value: number | null | undefined): string =>
  value === null || value === undefined ? missing : Number.isInteger(value) ? whole(value) : fixed(value, 1);
export const percent = (share: number | null | undefined, decimals = 1): string =>
  share === null || share === undefined || !Number.isFinite(share) ? missing : `${fixed(100 * share, decimals)}${thin}%`;
export const rate = (part: number, of: number): string => (of > 0 ? percent(part / of) : missing);
export const woe = (value: number | null | undefined): string => fixed(value, 2);
export const area = (value: number | null | undefined): string => fixed(value, 3);

/** Significant digits for penalties, differences and residuals: 0.00915, 3.1e−12. */
export function significant(value: number | null | undefined, digits = 3): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return missing;
  if (value === 0) return '0';
  const size = Math.abs(value);
  if (size >= 1e-4 && size < 1e6) return Number(value.toPrecision(digits)).toString().replace('-', minus);
  return value
    .toExponential(digits - 1)
    .replaceAll('-', minus)
    .replace('e+', 'e');
}

export function pValue(value: number | null | undefined): string {
  if (value === null || value === undefined) return missing;
  return value < 0.001 ? '< 0.001' : fixed(value, 3);
}

export const intervalText = (lower: number | null, upper: number | null, decimals: number): string =>
  lower === null || upper === null ? missing : `${fixed(lower, decimals)} to ${fixed(upper, decimals)}`;

/** ISO times as "2026-11-30 14:05 UTC"; a date alone stays as it is. */
export function timeText(iso: string): string {
  const parsed = /^\d{4}-\d{2}-\d{2}$/.test(iso) ? null : new Date(iso);
  if (parsed === null || Number.isNaN(parsed.getTime())) return iso;
  return `${parsed.toISOString().slice(0, 16).replace('T', ' ')} UTC`;
}

export function bytesText(bytes: number): string {
  return bytes < 1e6 ? `${fixed(bytes / 1000, 1)} kB` : `${fixed(bytes / 1e6, 1)} MB`;
}

export function plural(count: number, one: string, many = `${one}s`): string {
  return `${whole(count)} ${count === 1 ? one : many}`;
}
