import { trendOf } from '../binning/classing';
import { requireFinite } from '../checks';

/** How WOE runs along the value axis; "none" where there are no two bins with rows. */
export type ObservedTrend = 'rising' | 'falling' | 'one-peak' | 'one-valley' | 'mixed' | 'none';

/**
 * The trend of WOE over bins in the order of the value axis.
 * @param rows bins without rows are passed over
 * @example observedTrend([1.1, 0.2, -0.9], [10, 10, 10]) // 'falling'
 */
export function observedTrend(woe: ArrayLike<number>, rows: ArrayLike<number>): ObservedTrend {
  const trend = trendOf(Array.from(woe).filter((_, bin) => rows[bin] > 0));
  return trend === 'flat' ? 'none' : trend;
}

/**
 * Gini of a characteristic by its bins: 2 AUC - 1 with the bins ordered by WOE, ties counting one half.
 * @param goods and bads weighted counts of each bin
 * @param woe of each bin; only its order counts
 * @returns -1 to 1; 0 without goods or without bads
 * @throws NumericError for NaN (names its bin)
 * @example giniOfBins([90, 10], [10, 90], [2, -2]) // 0.8
 * Source: P(good above bad) + half of ties, as the area under the receiver operating curve (Hanley and McNeil 1982, from memory).
 */
export function giniOfBins(goods: ArrayLike<number>, bads: ArrayLike<number>, woe: ArrayLike<number>): number {
  requireFinite('woe', woe);
  const order = Array.from({ length: woe.length }, (_, bin) => bin).sort((a, b) => woe[a] - woe[b]);
  let totalGoods = 0;
  let totalBads = 0;
  let above = 0;
  let place = 0;
  while (place < order.length) {
    let tiedGoods = 0;
    let tiedBads = 0;
    const value = woe[order[place]];
    while (place < order.length && woe[order[place]] === value) {
      tiedGoods += goods[order[place]];
      tiedBads += bads[order[place]];
      place++;
    }
    above += tiedGoods * (totalBads + tiedBads / 2);
    totalGoods += tiedGoods;
    totalBads += tiedBads;
  }
  return totalGoods > 0 && totalBads > 0 ? (2 * above) / (totalGoods * totalBads) - 1 : 0;
}
