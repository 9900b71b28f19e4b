import { requireFinite, requireSameLength } from '../checks';

/**
 * Spearman's rank correlation: how far two scores order the same applicants alike. Equal values share the mean of their ranks.
 * @param a n finite values
 * @param b n finite values of the same rows
 * @returns -1 to 1; NaN where a score has one value for all rows, or there are fewer than two
 * @throws NumericError for NaN or infinite values (names the place), different lengths
 * @example rankCorrelation([1, 2, 3, 4], [10, 20, 40, 30]) // 0.8
 * Source: C. Spearman, The proof and measurement of association between two things, American Journal of Psychology 15, 1904; ties by
 * M. G. Kendall, Rank Correlation Methods, 1948, chapter 3 (the correlation of the mean ranks).
 */
export function rankCorrelation(a: ArrayLike<number>, b: ArrayLike<number>): number {
  requireSameLength('b', b.length, a.length);
  requireFinite('a', a);
  requireFinite('b', b);
  const [first, second] = [twiceCentredRanks(a), twiceCentredRanks(b)];
  let [together, ofFirst, ofSecond] = [0, 0, 0];
  for (let i = 0; i < first.length; i++) {
    together += first[i] * second[i];
    ofFirst += first[i] * first[i];
    ofSecond += second[i] * second[i];
  }
  return together / Math.sqrt(ofFirst * ofSecond);
}

/** Twice the distance of each value's mean rank from the middle rank: whole numbers, so that the order of adding them loses nothing in small samples. */
function twiceCentredRanks(values: ArrayLike<number>): Float64Array {
  const sorted = Float64Array.from(values).sort();
  const ranks = new Float64Array(values.length);
  for (let i = 0; i < ranks.length; i++) {
    const from = place(sorted, values[i], false);
    const to = place(sorted, values[i], true);
    // Ranks from + 1 to `to`: their mean twice is from + 1 + to; the middle rank twice is n + 1.
    ranks[i] = from + to - values.length;
  }
  return ranks;
}

/** How many sorted values lie below `value`, or at it too. */
function place(sorted: Float64Array, value: number, atToo: boolean): number {
  let [low, high] = [0, sorted.length];
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (sorted[middle] < value || (atToo && sorted[middle] === value)) low = middle + 1;
    else high = middle;
  }
  return low;
}
