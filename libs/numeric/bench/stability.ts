import { populationStability } from '../metrics/stability-index';
import { binOfSlots, layoutOf, sumSlots, type BinSums } from './slots';
import type { Bins, FineClasses, PartitionName, SlotCounts } from './types';

/** Characteristic stability index of hold-out and out-of-time against development; null where it cannot be told. */
export interface BenchStability {
  readonly holdOut: number | null;
  readonly outOfTime: number | null;
}

/** From here on an index reads as a moderate change, above 0.25 as a large one. Common practice; a limit is the lender's to set. */
export const moderateChange = 0.1;
export const largeChange = 0.25;

/**
 * CSI of each later partition against development over the bins as they are, by rows. Categories that development has not seen and that stay
 * neutral are a class of their own, as in a result. Where a class is empty on one side only, which says more than any other, half a row is added to every
 * class of both sides: the index has no value otherwise. Null where a partition has no rows.
 *
 * @example benchStability(fine, bins).holdOut // 0.004
 * Source: as `populationStability`.
 */
export function benchStability(fine: FineClasses, bins: Bins): BenchStability {
  const slots = binOfSlots(fine, bins);
  const count = layoutOf(bins).length;
  const expected = sumSlots(fine.development, slots, count);
  const against = (counts: SlotCounts | null): number | null => counts && indexOf(expected, sumSlots(counts, slots, count));
  return { holdOut: against(fine.holdOut), outOfTime: against(fine.outOfTime) };
}

function indexOf(expected: BinSums, actual: BinSums): number | null {
  const neutral = expected.outside + actual.outside > 0;
  const classes = ({ rows, outside }: BinSums): number[] => (neutral ? [...rows, outside] : [...rows]);
  const [from, to] = [classes(expected), classes(actual)];
  if (!from.some((rows) => rows > 0) || !to.some((rows) => rows > 0)) return null;
  return populationStability(from, to) ?? populationStability(from, to, 0.5);
}

/**
 * True where an index is a moderate change at least and also more than two samples of this size show by chance: above its expectation and twice its
 * standard deviation when nothing has changed, (1/N + 1/M) times those of a chi-square with B - 1 degrees of freedom.
 * Source: B. Yurdakul, Statistical Properties of Population Stability Index, Western Michigan University 2018.
 */
export function isUnstable(index: number, rowsExpected: number, rowsActual: number, bins: number): boolean {
  const freedom = Math.max(1, bins - 1);
  const chance = (1 / rowsExpected + 1 / rowsActual) * (freedom + 2 * Math.sqrt(2 * freedom));
  return index >= moderateChange && index > chance;
}

export const stabilityWords: Readonly<Record<Exclude<PartitionName, 'development'>, string>> = {
  holdOut: 'hold-out',
  outOfTime: 'out-of-time',
};
