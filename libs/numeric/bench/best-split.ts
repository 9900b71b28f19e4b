import { weightOfEvidence } from '../binning/weight-of-evidence';
import { usualSmoothing } from './reading';
import { type BinSums, binOfSlots, layoutOf, sumSlots } from './slots';
import type { Bins, FineClasses } from './types';

/** What automatic classing was asked for, as far as a split by hand can heed it. */
export interface SplitWish {
  /** Of development rows with a known value. */
  readonly smallestShare: number;
  readonly smallestGoods: number;
  readonly smallestBads: number;
  /** The largest information value when left out. */
  readonly criterion?: 'information value' | 'deviance' | undefined;
}

export interface SplitCandidate {
  readonly bins: Bins;
  /** The two bins that it makes of one. */
  readonly parts: readonly [number, number];
}

/**
 * The candidate that is best by the criterion among those whose two parts are as large as the constraints ask; where there is none, among those with a
 * good and a bad on either side. `small` says which it was. Null where no candidate has that either.
 */
export function bestSplit<C extends SplitCandidate>(
  fine: FineClasses,
  candidates: readonly C[],
  wish: SplitWish | null,
): { readonly candidate: C; readonly small: boolean } | null {
  let best: { candidate: C; small: boolean; value: number } | null = null;
  for (const candidate of candidates) {
    const layout = layoutOf(candidate.bins);
    const sums = sumSlots(fine.development, binOfSlots(fine, candidate.bins), layout.length);
    if (!candidate.parts.every((part) => sums.goods[part] > 0 && sums.bads[part] > 0)) continue;
    const known = layout.reduce((rows, { kind }, bin) => rows + (kind === 'cut' || kind === 'group' ? sums.rows[bin] : 0), 0);
    const small = wish !== null && candidate.parts.some((part) => isSmall(sums, part, known, wish));
    const value =
      wish?.criterion === 'deviance'
        ? -devianceOf(sums)
        : weightOfEvidence(sums.goods, sums.bads, usualSmoothing).informationValue;
    if (best === null || (best.small && !small) || (best.small === small && value > best.value))
      best = { candidate, small, value };
  }
  return best && { candidate: best.candidate, small: best.small };
}

const isSmall = ({ rows, goods, bads }: BinSums, part: number, known: number, wish: SplitWish): boolean =>
  rows[part] < wish.smallestShare * known * (1 - 1e-12) || goods[part] < wish.smallestGoods || bads[part] < wish.smallestBads;

/** Half of the deviance of the bad rates of the bins. */
function devianceOf({ goods, bads }: BinSums): number {
  const part = (count: number, of: number): number => (count > 0 ? -count * Math.log(count / of) : 0);
  return goods.reduce((sum, good, bin) => sum + part(good, good + bads[bin]) + part(bads[bin], good + bads[bin]), 0);
}
