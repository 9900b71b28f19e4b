import { requireThat } from '../checks';
import { normalQuantile } from '../distributions/normal';

export interface Interval {
  readonly lower: number;
  readonly upper: number;
}

/**
 * Wilson's score interval of a share.
 * @example wilsonInterval(81, 263) // { lower: 0.2553, upper: 0.3662 }
 * Source: E. B. Wilson, JASA 22, 1927; R. G. Newcombe, Statistics in Medicine 17, 1998, method 3.
 */
export function wilsonInterval(events: number, rows: number, level = 0.95): Interval {
  requireThat(rows > 0 && events >= 0 && events <= rows, 'events', 'events must lie between 0 and rows.');
  const z = normalQuantile(0.5 + level / 2);
  const share = events / rows;
  const centre = (share + (z * z) / (2 * rows)) / (1 + (z * z) / rows);
  const reach = (z / (1 + (z * z) / rows)) * Math.sqrt((share * (1 - share)) / rows + (z * z) / (4 * rows * rows));
  return { lower: events === 0 ? 0 : centre - reach, upper: events === rows ? 1 : centre + reach };
}
