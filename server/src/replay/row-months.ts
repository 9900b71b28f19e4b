import { isoDay } from './columns';
import type { TextColumn } from './source';

/** The month in which each row applied. */
export interface RowMonths {
  /** Index into `names`, NO_MONTH without an ISO date; over memory that threads share. */
  readonly of: Uint16Array;
  /** "2024-03", ascending. */
  readonly names: readonly string[];
}

export const NO_MONTH = 0xffff;

/**
 * Months of a column of ISO dates.
 * @param options.most more months than that make no column of dates of application
 * @param options.gaps every month from the first to the last is named, those without rows among them
 * @returns null without a date, and with more months than `most`
 * @example monthsOfRows(dates, { most: 240, gaps: false })?.names // ['2023-01', '2023-03']
 */
export function monthsOfRows(dates: TextColumn, { most, gaps }: { most: number; gaps: boolean }): RowMonths | null {
  const ordinals = dates.texts.map((text) => {
    const day = isoDay(text);
    return day === null ? null : Number(day.slice(0, 4)) * 12 + Number(day.slice(5, 7)) - 1;
  });
  const there = [...new Set(ordinals.filter((ordinal) => ordinal !== null))].sort((a, b) => a - b);
  if (there.length === 0) return null;
  const [first, last] = [there[0], there[there.length - 1]];
  if ((gaps ? last - first + 1 : there.length) > most) return null;
  const named = gaps ? Array.from({ length: last - first + 1 }, (_, place) => first + place) : there;
  const places = new Map(named.map((ordinal, place) => [ordinal, place]));
  const byText = Uint16Array.from(ordinals, (ordinal) => (ordinal === null ? NO_MONTH : (places.get(ordinal) ?? NO_MONTH)));
  const of = new Uint16Array(new SharedArrayBuffer(2 * dates.codes.length));
  for (let row = 0; row < of.length; row++) of[row] = byText[dates.codes[row]];
  return { of, names: named.map(nameOf) };
}

const nameOf = (ordinal: number): string =>
  `${String(Math.floor(ordinal / 12)).padStart(4, '0')}-${String((ordinal % 12) + 1).padStart(2, '0')}`;
