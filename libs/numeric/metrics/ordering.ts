import { requireFinite, requireSameLength, requireThat } from '../checks';
import { NumericError } from '../errors';

/**
 * Row numbers in ascending order of value; rows of equal value stay in their order.
 * @param values n finite numbers
 * @returns n row numbers, from 0
 * @example ascendingOrder([3, 1, 2]) // [1, 2, 0]
 */
export function ascendingOrder(values: ArrayLike<number>): Uint32Array {
  const order = new Uint32Array(values.length);
  for (let i = 0; i < order.length; i++) order[i] = i;
  return order.sort((a, b) => values[a] - values[b] || a - b);
}

/**
 * The scores of the goods and of the bads, each ascending.
 * @param scores n scores, higher = good
 * @param outcome n values, 1 good, 0 bad
 * @throws NumericError for different lengths, an outcome that is neither, NaN (names its row)
 * @example scoresByOutcome([3, 1, 2], [1, 1, 0]).goods // [1, 3]
 */
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

/** Throws unless the weights of goods and of bads are both above 0. @throws NumericError "one-class", which names the class that is missing */
export function requireBothClasses(goods: number, bads: number): void {
  if (!(goods > 0)) throw new NumericError('one-class', 'There is no good row.', { name: 'outcome', class: 'good' });
  if (!(bads > 0)) throw new NumericError('one-class', 'There is no bad row.', { name: 'outcome', class: 'bad' });
}

/**
 * Quantile of type 7 (Hyndman and Fan): h = (n - 1)p, linear between the order statistics around it.
 * @param values n finite values, sorted or not
 * @param p probability, 0 to 1
 * @throws NumericError for no value, NaN (names its place), a p outside
 * @example quantileType7([1, 2, 3, 4], 0.5) // 2.5
 * Source: R. J. Hyndman and Y. Fan, Sample quantiles in statistical packages, The American Statistician 50(4), 1996.
 */
export function quantileType7(values: ArrayLike<number>, p: number): number {
  return quantilesType7(values, [p])[0];
}

/**
 * Several quantiles of type 7 with one sort.
 * @param values n finite values, sorted or not
 * @param probabilities each 0 to 1
 * @throws NumericError as `quantileType7`
 * @example quantilesType7([4, 1, 3, 2], [0, 0.25]) // [1, 1.75]
 * Source: as `quantileType7`.
 */
export function quantilesType7(values: ArrayLike<number>, probabilities: readonly number[]): number[] {
  requireSome(values);
  requireFinite('values', values);
  const sorted = new Float64Array(values).sort();
  return probabilities.map((p) => quantileOfSorted(sorted, p));
}

/**
 * Quantile of type 7 of values that are sorted already, for whoever asks for many of them.
 * @param sorted n finite values, ascending, NaN last, as `sort` leaves them; not looked at for that
 * @param p 0 to 1
 * @throws NumericError without values, for NaN or infinite ones (which lie at an end), and for p outside
 * @example quantileOfSorted(Float64Array.of(1, 2, 4), 0.75) // 3
 * Source: as `quantileType7`.
 */
export function quantileOfSorted(sorted: Float64Array, p: number): number {
  requireSome(sorted);
  const last = sorted.length - 1;
  if (!Number.isFinite(sorted[0]) || !Number.isFinite(sorted[last])) requireFinite('values', sorted);
  requireThat(p >= 0 && p <= 1, 'p', 'p must lie between 0 and 1.');
  const place = last * p;
  const low = Math.floor(place);
  const high = Math.min(low + 1, last);
  return sorted[low] + (place - low) * (sorted[high] - sorted[low]);
}

function requireSome(values: ArrayLike<number>): void {
  if (values.length === 0) throw new NumericError('no-rows', 'A quantile needs at least one value.', { name: 'values' });
}
