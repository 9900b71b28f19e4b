import type { BenchReading, BinFigures, PartitionName } from '@tallystone/numeric/bench';
import type { ScaleLinear } from 'd3-scale';
import { count, share, woe } from '../../../ui/numbers';
import { partitionName } from '../../../ui/partition-mark';
import type { DrawnBin } from './geometry';

interface Mark {
  readonly x: number;
  readonly y: number;
  readonly label: string;
}

/** One bin of the ladder of log odds: development as a bar with its interval, later partitions as marks. */
export interface Rung {
  readonly x: number;
  readonly width: number;
  readonly bar: { readonly y: number; readonly high: number; readonly low: number; readonly label: string } | null;
  readonly holdOut: Mark | null;
  readonly outOfTime: Mark | null;
}

/** A rung under every column that is a bin of its own. */
export function ladderOf(columns: readonly DrawnBin[], reading: BenchReading, scale: ScaleLinear<number, number>): Rung[] {
  const [bottom, top] = scale.domain();
  const clamp = (value: number): number => scale(Math.min(top, Math.max(bottom, value)));
  return columns.flatMap(({ bin, label, x0, x1 }) => {
    if (bin === null) return [];
    const { development, holdOut, outOfTime } = reading.bins[bin].figures;
    const inset = Math.min(5, (x1 - x0) / 6);
    const mark = (figures: BinFigures | null, part: number, name: PartitionName): Mark | null =>
      figures?.logOdds == null
        ? null
        : {
            x: x0 + (x1 - x0) * part,
            y: scale(figures.logOdds),
            label: `${partitionName(name)}, ${label}: log odds ${woe(figures.logOdds)}, bad rate ${share(figures.badRate)}`,
          };
    return [
      {
        x: x0 + inset,
        width: Math.max(2, x1 - x0 - 2 * inset),
        bar:
          development?.logOdds == null || development.logOddsLower === null || development.logOddsUpper === null
            ? null
            : {
                y: scale(development.logOdds),
                high: clamp(development.logOddsUpper),
                low: clamp(development.logOddsLower),
                label: `Development, ${label}: log odds ${woe(development.logOdds)}, bad rate ${share(development.badRate)}, ${count(development.rows)} rows`,
              },
        holdOut: mark(holdOut, outOfTime ? 0.36 : 0.5, 'holdOut'),
        outOfTime: mark(outOfTime, 0.64, 'outOfTime'),
      },
    ];
  });
}
