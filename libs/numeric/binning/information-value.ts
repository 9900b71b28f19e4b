import { requireFinite, requireSameLength } from '../checks';
import { noncentralityAt } from '../distributions/noncentral';
import { requireLevel } from '../metrics/wilson';
import { weightOfEvidence, type Smoothing } from './weight-of-evidence';

export interface InformationValueInterval {
  readonly informationValue: number;
  readonly lower: number;
  readonly upper: number;
  readonly standardError: number;
}

/**
 * Interval of the population's information value, bins held fixed. That of a sample lies above it, by about (bins - 1) / n with 1 / n = 1 / goods + 1 / bads,
 * which is most of it where it is small. So n times it is read as a noncentral chi-square with one degree less than there are filled bins, whose noncentrality
 * is n times the population's; n is scaled so that the variance is that of the delta method, which differs where shares differ much. The lower end is 0 where
 * nothing speaks against it, the upper end never lies below the value itself. What was gained by choosing the bins on the same rows is not in it.
 * @param goods and bads counts of each bin, weighted or not, each with a sum above 0
 * @param options `level` of confidence (default 0.95), `smoothing` (default half a row where a cell is 0)
 * @throws NumericError as `weightOfEvidence`, and for a level outside (0, 1)
 * @example informationValueInterval([300, 250, 150], [30, 60, 110], { level: 0.95 }).lower // 0.39
 * Source: S. Kullback, Information Theory and Statistics, 1959, chapter 6 (the divergence of two samples is asymptotically a noncentral chi-square); the
 *   delta method as in any text. Both from memory; the coverage is held by a test.
 */
export function informationValueInterval(
  goods: ArrayLike<number>,
  bads: ArrayLike<number>,
  options: { level?: number; smoothing?: Smoothing } = {},
): InformationValueInterval {
  requireSameLength('bads', bads.length, goods.length);
  requireFinite('goods', goods);
  requireFinite('bads', bads);
  const level = options.level ?? 0.95;
  requireLevel(level);
  const { informationValue } = weightOfEvidence(goods, bads, options.smoothing ?? { amount: 0.5, when: 'zero-cell' });
  const freedom =
    Array.from(goods, (count, bin) => (count + bads[bin] > 0 ? 1 : 0)).reduce((sum: number, one) => sum + one, 0) - 1;
  if (freedom < 1) return { informationValue, lower: informationValue, upper: informationValue, standardError: 0 };
  const scale = scaleOf(goods, bads);
  const observed = scale * informationValue;
  const outside = (1 - level) / 2;
  return {
    informationValue,
    lower: noncentralityAt(observed, freedom, outside) / scale,
    upper: Math.max(informationValue, noncentralityAt(observed, freedom, 1 - outside) / scale),
    standardError: Math.sqrt(2 * (freedom + 2 * Math.max(0, observed - freedom))) / scale,
  };
}

/** What the information value is multiplied by to be read as a chi-square: 4 times it by its variance, n where the shares hardly differ. */
function scaleOf(goods: ArrayLike<number>, bads: ArrayLike<number>): number {
  const filled = Array.from(goods, (_, bin) => bin).filter((bin) => goods[bin] + bads[bin] > 0);
  const [allGoods, allBads] = [total(goods), total(bads)];
  // Half a row more in each bin: logarithms of empty ones have no value, and those of nearly empty ones say too much.
  const share = (counts: ArrayLike<number>, all: number): number[] =>
    filled.map((bin) => (counts[bin] + 0.5) / (all + 0.5 * filled.length));
  const [g, b] = [share(goods, allGoods), share(bads, allBads)];
  const woe = g.map((of, place) => Math.log(of / b[place]));
  const divergence = g.reduce((sum, of, place) => sum + (of - b[place]) * woe[place], 0);
  const variance =
    spread(g, woe.map((log, place) => log + 1 - b[place] / g[place])) / allGoods +
    spread(b, woe.map((log, place) => -log + 1 - g[place] / b[place])) / allBads; // prettier-ignore
  return variance > 0 && divergence > 0 ? (4 * divergence) / variance : 1 / (1 / allGoods + 1 / allBads);
}

/** Variance of values that are drawn with these shares. */
function spread(shares: readonly number[], values: readonly number[]): number {
  const mean = shares.reduce((sum, of, place) => sum + of * values[place], 0);
  return shares.reduce((sum, of, place) => sum + of * (values[place] - mean) ** 2, 0);
}

function total(values: ArrayLike<number>): number {
  return Array.from(values).reduce((sum, value) => sum + value, 0);
}
