import { requireFinite, requireSameLength, requireThat } from '../checks';
import { NumericError } from '../errors';

/** Row numbers in ascending order of value; rows of equal value stay in their order. */
export function ascendingOrder(values: ArrayLike<number>): Uint32Array {
  const order = new Uint32Array(values.length);
  for (let i = 0; i < order.length; i++) order[i] = i;
  return order.sort((a, b) => values[a] - values[b] || a - b);
}

/** The scores of the goods and of the bads, each ascending. */
export function scoresByOutcome(
  scores: ArrayLike<number>,
  outcome: ArrayLike<number>,
): { goods: Float64Array; bads: Float64Array } {
  requireSameLength('outcome', outcome.length, scores.length);
  let count = 0;
  for (let i = 0; i < outcome.length; i++) {
    requireThat(outcome[i] === 0 || outcome[i] === 1, 'outcome', `outcome is ${outcome[i]} at index ${i}.`);
    count += outcome[i];
  }
  requireFinite('scores', scores);
  const goods = new Float64Array(count);
  const bads = new Float64Array(scores.length - count);
  let g = 0;
  let b = 0;
  for (let i = 0; i < scores.length; i++) {
    if (outcome[i] === 1) goods[g++] = scores[i];
    else bads[b++] = scores[i];
  }
  return { goods: goods.sort(), bads: bads.sort() };
}

/** Throws unless there is a good and a bad. */
export function requireBothClasses(goods: number, bads: number): void {
  if (!(goods > 0)) throw new NumericError('one-class', 'There is no good row.', { name: 'outcome', class: 'good' });
  if (!(bads > 0)) throw new NumericError('one-class', 'There is no bad row.', { name: 'outcome', class: 'bad' });
}

/**
 * Quantile of type 7 (Hyndman and Fan): h = (n - 1)p, linear between the order statistics around it.
 * @param values n values, sorted or not
 * @example quantileType7([1, 2, 3, 4], 0.5) // 2.5
 * Source: R. J. Hyndman and Y. Fan, Sample quantiles in statistical packages, The American Statistician 50(4), 1996.
 */
export function quantileType7(values: ArrayLike<number>, p: number): number {
  return quantilesType7(values, [p])[0];
}

/** Several quantiles of type 7 with one sort. */
export function quantilesType7(values: ArrayLike<number>, probabilities: readonly number[]): number[] {
  if (values.length === 0) throw new NumericError('no-rows', 'A quantile needs at least one value.', { name: 'values' });
  const sorted = Float64Array.from(values).sort();
  if (Number.isNaN(sorted[sorted.length - 1])) throw new NumericError('not-a-number', 'values has a NaN.', { name: 'values' });
  return probabilities.map((p) => {
    requireThat(p >= 0 && p <= 1, 'p', 'p must lie between 0 and 1.');
    const place = (sorted.length - 1) * p;
    const low = Math.floor(place);
    const high = Math.min(low + 1, sorted.length - 1);
    return sorted[low] + (place - low) * (sorted[high] - sorted[low]);
  });
}
