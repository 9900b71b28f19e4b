import { requireFinite, requireThat } from '../checks';
import { Generator } from '../random/generator';
import { multinomial } from '../resampling/bootstrap';
import { classNumeric, type Constraints, type FineCounts } from './classing';

/** Trends that are tried, simplest first: of equally good ones the first is taken. */
export const triedTrends = ['rising', 'falling', 'one-peak', 'one-valley', 'any'] as const;

/** Held-out deviances that differ by less than this part of themselves are equal. */
const EQUAL = 1e-9;

export interface ChosenTrend {
  readonly trend: Constraints['trend'];
  /** Mean held-out deviance per unit of weight, in the order of `triedTrends`. */
  readonly deviances: readonly number[];
}

/**
 * The trend whose bins predict best what they have not seen: K-fold cross-validated deviance, with the classing repeated in every fold. Rows of one fine
 * class and outcome are alike, so that folds are drawn from the counts: each fold has a random part of a class's good rows and of its bad rows, and that
 * part of their weights. Held-out goods and bads are predicted by the bad rate of their bin in the training part, with half a good and half a bad of mean
 * weight added. Rows are drawn and not weights, so that the unit in which weights are stated changes nothing.
 *
 * @param fine goods and bads (weighted), rows and bad rows of each fine class in the order of values; where bad rows are left out, rows are parted as weights are
 * @param constraints its trend is not looked at
 * @throws NumericError for fewer than two folds
 * @example chooseTrend({ goods: [80, 60, 30, 55], bads: [20, 30, 50, 10], rows: [100, 90, 80, 65] }, constraints, { folds: 5, seed: 1 }).trend // for instance 'one-valley'
 * Source: M. Stone, Cross-validatory choice and assessment of statistical predictions, J. Royal Statistical Society B 36, 1974.
 */
export function chooseTrend(
  fine: TrendCounts,
  constraints: Constraints,
  options: { folds: number; seed: number; totals?: { goods: number; bads: number } },
): ChosenTrend {
  const { folds, seed } = options;
  requireThat(Number.isInteger(folds) && folds >= 2, 'folds', 'at least two folds are needed.');
  for (const name of ['goods', 'bads', 'rows'] as const) requireFinite(name, fine[name]);
  if (fine.badRows) requireFinite('badRows', fine.badRows);
  const parts = partCounts(fine, folds, new Generator(seed));
  const classes = fine.rows.length;
  const rows = sum(fine.rows, 0, classes);
  const half = rows > 0 ? (0.5 * (sum(fine.goods, 0, classes) + sum(fine.bads, 0, classes))) / rows : 0.5;
  const deviances = triedTrends.map((trend) => {
    let deviance = 0;
    let weight = 0;
    for (const held of parts) {
      const training: FineCounts = {
        goods: Array.from(fine.goods, (count, i) => Math.max(0, count - held.goods[i])),
        bads: Array.from(fine.bads, (count, i) => Math.max(0, count - held.bads[i])),
        rows: Array.from(fine.rows, (count, i) => Math.max(0, count - held.rows[i])),
      };
      const { cuts } = classNumeric(training, { ...constraints, trend }, options.totals);
      const ends = [...cuts, training.goods.length];
      ends.forEach((end, bin) => {
        const start = bin === 0 ? 0 : ends[bin - 1];
        const goods = sum(training.goods, start, end) + half;
        const bads = sum(training.bads, start, end) + half;
        const [heldGoods, heldBads] = [sum(held.goods, start, end), sum(held.bads, start, end)];
        if (!(heldGoods + heldBads > 0)) return;
        deviance -= 2 * (heldGoods * Math.log(goods / (goods + bads)) + heldBads * Math.log(bads / (goods + bads)));
        weight += heldGoods + heldBads;
      });
    }
    return weight > 0 ? deviance / weight : 0;
  });
  let best = 0;
  deviances.forEach((deviance, i) => {
    if (deviance < deviances[best] * (1 - EQUAL)) best = i;
  });
  return { trend: triedTrends[best], deviances };
}

/** Fine classes of which it is known how many of the rows are bad: with weights that cannot be seen from goods and bads. */
export interface TrendCounts extends FineCounts {
  readonly badRows?: ArrayLike<number> | undefined;
}

interface Part {
  readonly goods: Float64Array;
  readonly bads: Float64Array;
  readonly rows: Float64Array;
}

/** Every class's good and bad rows, dealt to the folds at random in equal chances, with their weights. */
function partCounts(fine: TrendCounts, folds: number, random: Generator): Part[] {
  const classes = fine.rows.length;
  const parts = Array.from({ length: folds }, (): Part => ({
    goods: new Float64Array(classes),
    bads: new Float64Array(classes),
    rows: new Float64Array(classes),
  }));
  const equal = new Float64Array(folds).fill(1);
  for (const side of ['goods', 'bads'] as const) {
    for (let i = 0; i < classes; i++) {
      const bads = badRowsOf(fine, i);
      const units = side === 'bads' ? bads : Math.max(0, Math.round(fine.rows[i]) - bads);
      if (units === 0) continue;
      multinomial(random, units, equal).forEach((drawn, fold) => {
        parts[fold][side][i] = (drawn / units) * fine[side][i];
        parts[fold].rows[i] += drawn;
      });
    }
  }
  return parts;
}

/** A side that has weight has a row at least. */
function badRowsOf({ goods, bads, rows, badRows }: TrendCounts, i: number): number {
  if (badRows) return Math.round(badRows[i]);
  const weight = goods[i] + bads[i];
  if (!(weight > 0)) return 0;
  const least = bads[i] > 0 ? 1 : 0;
  const most = Math.round(rows[i]) - (goods[i] > 0 ? 1 : 0);
  return Math.max(least, Math.min(most, Math.round((rows[i] * bads[i]) / weight)));
}

function sum(values: ArrayLike<number>, start: number, end: number): number {
  let total = 0;
  for (let i = start; i < end; i++) total += values[i];
  return total;
}
