import type { ScaleBand } from 'd3-scale';

export interface MonthTick {
  readonly month: string;
  readonly x: number;
  readonly anchor: 'start' | 'middle';
}

/** Pixels that the name of a month takes, with room beside it. */
const room = 90;

/** The first month of an axis, and those after it as far as there is room. @example monthTicks(scaleBand<string>().domain(['2023-01']).range([0, 90])) */
export function monthTicks(x: ScaleBand<string>): MonthTick[] {
  const months = x.domain();
  const [left, right] = x.range();
  const every = Math.max(1, Math.ceil(months.length / Math.max(2, Math.floor((right - left) / room))));
  return months
    .map((month, place) => ({ month, place }))
    .filter(({ place }) => place % every === 0 && place <= months.length - 1 - every / 2)
    .map(({ month, place }) => ({
      month: month.replace('-', '\u2011'),
      x: (x(month) ?? 0) + (place === 0 ? 0 : x.bandwidth() / 2),
      anchor: place === 0 ? 'start' : 'middle',
    }));
}
