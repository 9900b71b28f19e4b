import { requireThat } from '../checks';
import { normalQuantile } from '../distributions/normal';

export interface Interval {
  readonly lower: number;
  readonly upper: number;
}

/** A level of confidence lies strictly between 0 and 1. */
export function requireLevel(level: number): void {
  requireThat(level > 0 && level < 1, 'level', `level is ${level}; it lies strictly between 0 and 1.`);
}

/** Events of rows: 0 <= events <= rows, rows above 0, both finite. */
export function requireShare(events: number, rows: number): void {
  requireThat(
    rows > 0 && rows < Infinity && events >= 0 && events <= rows,
    'events',
    `there are ${events} events of ${rows}: events must lie between 0 and rows.`,
  );
}

/**
 * Wilson's score interval of a share.
 * @param events number of events, 0 to rows
 * @param rows number of rows, above 0; weighted counts are taken as if they were rows
 * @param level of confidence, strictly between 0 and 1
 * @returns limits between 0 and 1; exactly 0 without events and 1 when every row is one
 * @throws NumericError for arguments outside, and for NaN
 * @example wilsonInterval(81, 263) // { lower: 0.2553, upper: 0.3662 }
 * Source: E. B. Wilson, JASA 22, 1927; R. G. Newcombe, Statistics in Medicine 17, 1998, method 3.
 */
export function wilsonInterval(events: number, rows: number, level = 0.95): Interval {
  requireShare(events, rows);
  requireLevel(level);
  const z = normalQuantile(0.5 + level / 2);
  const share = events / rows;
  const centre = (share + (z * z) / (2 * rows)) / (1 + (z * z) / rows);
  const reach = (z / (1 + (z * z) / rows)) * Math.sqrt((share * (1 - share)) / rows + (z * z) / (4 * rows * rows));
  return { lower: events === 0 ? 0 : centre - reach, upper: events === rows ? 1 : centre + reach };
}
