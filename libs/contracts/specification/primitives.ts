import { z } from 'zod';

/** Values that several parts of the specification share. */

/** A column's name as the file's header spells it. `__proto__` is refused because results are keyed by column. */
export const columnName = z
  .string()
  .min(1)
  .refine((name) => name !== '__proto__', 'A column cannot be called "__proto__"; rename it in the file.');

export const finite = z.number();

/** Days of the proleptic Gregorian calendar as ISO 8601 writes them. */
export const isoDate = z.string().refine((text) => isIsoDate(text), 'expected an ISO date, YYYY-MM-DD');

/** True for YYYY-MM-DD that names an existing day. */
export function isIsoDate(text: string): boolean {
  const parts = /^(\d{4})-(\d{2})-(\d{2})$/.exec(text);
  if (parts === null) return false;
  const [year, month, day] = [Number(parts[1]), Number(parts[2]), Number(parts[3])];
  if (month < 1 || month > 12 || day < 1) return false;
  const leap = (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0;
  return day <= [31, leap ? 29 : 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31][month - 1];
}

export const seed = z.number().int();
export const texts = z.array(z.string());
