import { requireFinite, requireSameLength, requireThat } from '../checks';
import { ZeroCellError } from '../errors';

/** Smoothing of weight of evidence: `amount` is added to the goods and to the bads of every bin that has rows. */
export interface Smoothing {
  readonly amount: number;
  /** "zero-cell": only in a characteristic in which a bin with rows has no good or no bad. */
  readonly when: 'zero-cell' | 'always' | 'never';
}

export interface WeightOfEvidence {
  /** ln(share of goods / share of bads) of each bin; 0 for a bin without rows. */
  readonly woe: Float64Array;
  /** What each bin adds to the information value. */
  readonly parts: Float64Array;
  readonly informationValue: number;
  readonly smoothed: boolean;
}

/**
 * Weight of evidence and information value of a characteristic.
 *
 * WOE_i = ln[(g_i/G) / (b_i/B)], IV = sum (g_i/G - b_i/B) WOE_i. Smoothing s replaces g_i/G by (g_i + s)/(G + sK) and b_i/B by
 * (b_i + s)/(B + sK), K the bins that have rows. A bin without rows has WOE 0 and is not in K. Higher WOE means lower risk.
 *
 * @param goods weighted number of goods of each of K bins, at least 0
 * @param bads weighted number of bads of each bin
 * @param smoothing amount (in rows) and when it is added
 * @returns WOE in nats by bin, what each bin adds to the information value, their sum, and whether smoothing took place
 * @throws ZeroCellError where "never" meets a bin with rows but no good or no bad
 * @throws NumericError for different lengths, NaN, negative counts, or no good or no bad at all
 * @example weightOfEvidence([300, 250, 150], [30, 60, 110], { amount: 0.5, when: 'zero-cell' }).woe // [1.0498, 0.1744, -0.9426]
 * Source: I. J. Good, Probability and the Weighing of Evidence, Griffin 1950; S. Kullback, Information Theory and Statistics, Wiley 1959.
 */
export function weightOfEvidence(goods: ArrayLike<number>, bads: ArrayLike<number>, smoothing: Smoothing): WeightOfEvidence {
  const bins = goods.length;
  requireSameLength('bads', bads.length, bins);
  requireFinite('goods', goods);
  requireFinite('bads', bads);
  requireThat(
    Number.isFinite(smoothing.amount) && smoothing.amount >= 0,
    'smoothing',
    'smoothing must be a number of at least 0.',
  );
  let totalGoods = 0;
  let totalBads = 0;
  let filled = 0;
  let zeroCell = -1;
  for (let i = 0; i < bins; i++) {
    requireThat(goods[i] >= 0 && bads[i] >= 0, 'goods', `bin ${i} has a negative count.`);
    totalGoods += goods[i];
    totalBads += bads[i];
    if (goods[i] + bads[i] === 0) continue;
    filled++;
    if (zeroCell < 0 && (goods[i] === 0 || bads[i] === 0)) zeroCell = i;
  }
  requireThat(totalGoods > 0, 'goods', 'there is no good in any bin.');
  requireThat(totalBads > 0, 'bads', 'there is no bad in any bin.');
  const asked = smoothing.when === 'always' || (smoothing.when === 'zero-cell' && zeroCell >= 0);
  const smoothed = asked && smoothing.amount > 0;
  if (zeroCell >= 0 && !smoothed) throw new ZeroCellError(zeroCell, goods[zeroCell] === 0 ? 'goods' : 'bads');
  const s = smoothed ? smoothing.amount : 0;
  const woe = new Float64Array(bins);
  const parts = new Float64Array(bins);
  let informationValue = 0;
  for (let i = 0; i < bins; i++) {
    if (goods[i] + bads[i] === 0) continue;
    const shareOfGoods = (goods[i] + s) / (totalGoods + s * filled);
    const shareOfBads = (bads[i] + s) / (totalBads + s * filled);
    woe[i] = Math.log(shareOfGoods / shareOfBads);
    parts[i] = (shareOfGoods - shareOfBads) * woe[i];
    informationValue += parts[i];
  }
  return { woe, parts, informationValue, smoothed };
}
