import { scaleLinear } from 'd3-scale';
import { fixed } from '../../../ui/numbers';

/** A value with its interval over resamples; null where no resample kept it. */
export interface Interval {
  readonly value: number;
  readonly lower: number | null;
  readonly upper: number | null;
}

export interface IntervalPlace {
  readonly y: number;
  readonly x: number;
  /** Path of the interval with its ends, or null. */
  readonly path: string | null;
}

export interface IntervalChart {
  readonly left: number;
  readonly right: number;
  readonly axis: number;
  readonly height: number;
  readonly zero: number;
  readonly rows: readonly IntervalPlace[];
  readonly ticks: readonly { readonly value: number; readonly x: number; readonly text: string }[];
}

/** One row a value on a common axis that holds zero. */
export function intervalChart(
  intervals: readonly Interval[],
  { left, right, rowHeight, decimals }: { readonly left: number; readonly right: number; readonly rowHeight: number; readonly decimals: number },
): IntervalChart {
  const low = Math.min(0, ...intervals.map(({ value, lower }) => Math.min(value, lower ?? value)));
  const high = Math.max(0, ...intervals.map(({ value, upper }) => Math.max(value, upper ?? value)));
  const x = scaleLinear()
    .domain(low === high ? [0, 1] : [low - 0.02 * (high - low), high + 0.02 * (high - low)])
    .range([left, right]);
  const axis = 6 + intervals.length * rowHeight;
  return {
    left,
    right,
    axis,
    height: axis + 26,
    zero: x(0),
    rows: intervals.map(({ value, lower, upper }, i) => {
      const y = 6 + (i + 0.5) * rowHeight;
      const path = lower === null || upper === null ? null : `M${x(lower)} ${y - 5}v10M${x(lower)} ${y}H${x(upper)}M${x(upper)} ${y - 5}v10`;
      return { y, x: x(value), path };
    }),
    ticks: x.ticks(Math.max(3, Math.min(7, Math.floor((right - left) / 56)))).map((value) => ({ value, x: x(value), text: fixed(value, decimals) })),
  };
}
