import { requireFinite, requireSameLength, requireThat } from '../checks';
import { quantilesType7 } from '../metrics/ordering';
import { requireLevel } from '../metrics/wilson';
import { Generator } from '../random/generator';
import { multinomial } from '../resampling/bootstrap';
import { weightOfEvidence, type Smoothing } from './weight-of-evidence';

export interface InformationValueInterval {
  readonly informationValue: number;
  readonly lower: number;
  readonly upper: number;
  readonly standardError: number;
}

/**
 * Percentile interval of the information value by stratified bootstrap of the counts, bins held fixed: goods and bads are redrawn apart from one
 * another. The information value of a sample lies above that of its population, so the interval does too: it shows spread, not bias.
 * @param goods and bads counts of each bin; weighted counts are redrawn as their rounded total, in their own proportions
 * @param options `resamples` (default 500), `seed`, `level` of confidence (default 0.95), `smoothing` (default half a row where a cell is 0)
 * @throws NumericError as `weightOfEvidence`, for fewer than ten resamples and a level outside (0, 1)
 * @example informationValueInterval([300, 250, 150], [30, 60, 110], { resamples: 500, seed: 1, level: 0.95 })
 * Source: B. Efron and R. Tibshirani, An Introduction to the Bootstrap, 1993, section 13.3.
 */
export function informationValueInterval(
  goods: ArrayLike<number>,
  bads: ArrayLike<number>,
  options: { resamples?: number; seed: number; level?: number; smoothing?: Smoothing },
): InformationValueInterval {
  requireSameLength('bads', bads.length, goods.length);
  requireFinite('goods', goods);
  requireFinite('bads', bads);
  const resamples = options.resamples ?? 500;
  requireThat(Number.isInteger(resamples) && resamples >= 10, 'resamples', 'at least ten resamples are needed.');
  const smoothing = options.smoothing ?? { amount: 0.5, when: 'zero-cell' };
  const level = options.level ?? 0.95;
  requireLevel(level);
  const totalGoods = Math.max(1, Math.round(total(goods)));
  const totalBads = Math.max(1, Math.round(total(bads)));
  const values = new Float64Array(resamples);
  for (let b = 0; b < resamples; b++) {
    const random = new Generator(options.seed, b);
    const drawnGoods = multinomial(random, totalGoods, goods);
    const drawnBads = multinomial(random, totalBads, bads);
    values[b] = weightOfEvidence(drawnGoods, drawnBads, smoothing).informationValue;
  }
  const mean = total(values) / resamples;
  const spread = values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (resamples - 1);
  const [lower, upper] = quantilesType7(values, [(1 - level) / 2, (1 + level) / 2]);
  const { informationValue } = weightOfEvidence(goods, bads, smoothing);
  return { informationValue, lower, upper, standardError: Math.sqrt(spread) };
}

function total(values: ArrayLike<number>): number {
  return Array.from(values).reduce((sum, value) => sum + value, 0);
}
