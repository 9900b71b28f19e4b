import { requireFinite, requireOutcome, requireSameLength, requireThat, requireWeights } from '../checks';
import { normalQuantile, normalTwoSided } from '../distributions/tails';
import { ascendingOrder, requireBothClasses, scoresByOutcome } from './ordering';
import { requireLevel } from './wilson';

/**
 * Area under the ROC curve: the probability that a good scores above a bad, ties one half.
 * @param scores n scores, higher = good
 * @param outcome n values, 1 good, 0 bad
 * @param weights n weights of at least 0; absent = 1 each
 * @returns 0 to 1; 1/2 for scores that are all equal
 * @throws NumericError for one class only, NaN (names its row), different lengths
 * @example auc([1, 2, 3, 4], [0, 0, 1, 1]) // 1
 * Source: J. A. Hanley and B. J. McNeil, Radiology 143, 1982.
 */
export function auc(scores: ArrayLike<number>, outcome: ArrayLike<number>, weights?: ArrayLike<number>): number {
  return weights ? weightedAuc(scores, outcome, weights) : unweightedAuc(scores, outcome);
}

/**
 * Gini coefficient (accuracy ratio): 2 AUC - 1.
 * @param areaUnderCurve 0 to 1
 * @throws NumericError for an area outside, and for NaN
 * @example gini(0.75) // 0.5
 * Source: B. Engelmann, E. Hayden and D. Tasche, Testing rating accuracy, Risk, January 2003.
 */
export function gini(areaUnderCurve: number): number {
  requireThat(areaUnderCurve >= 0 && areaUnderCurve <= 1, 'area', `the area is ${areaUnderCurve}; it lies between 0 and 1.`);
  return 2 * areaUnderCurve - 1;
}

function unweightedAuc(scores: ArrayLike<number>, outcome: ArrayLike<number>): number {
  const { goods, bads } = scoresByOutcome(scores, outcome);
  requireBothClasses(goods.length, bads.length);
  // Twice the number of won pairs stays a whole number, so the sum is exact below 2^53.
  let twice = 0;
  let below = 0;
  let upTo = 0;
  for (let i = 0; i < goods.length; i++) {
    while (below < bads.length && bads[below] < goods[i]) below++;
    if (upTo < below) upTo = below;
    while (upTo < bads.length && bads[upTo] <= goods[i]) upTo++;
    twice += below + upTo;
  }
  return twice / 2 / (goods.length * bads.length);
}

interface Step {
  readonly score: number;
  readonly goods: number;
  readonly bads: number;
}

/** Weight of goods and bads at each distinct score, ascending. */
function steps(scores: ArrayLike<number>, outcome: ArrayLike<number>, weights?: ArrayLike<number>): Step[] {
  requireSameLength('outcome', outcome.length, scores.length);
  requireOutcome(outcome);
  requireFinite('scores', scores);
  if (weights) {
    requireSameLength('weights', weights.length, scores.length);
    requireWeights('weights', weights);
  }
  const order = ascendingOrder(scores);
  const found: { score: number; goods: number; bads: number }[] = [];
  for (const row of order) {
    let last = found[found.length - 1];
    if (!last || last.score !== scores[row]) {
      last = { score: scores[row], goods: 0, bads: 0 };
      found.push(last);
    }
    const weight = weights ? weights[row] : 1;
    if (outcome[row] === 1) last.goods += weight;
    else last.bads += weight;
  }
  return found;
}

function weightedAuc(scores: ArrayLike<number>, outcome: ArrayLike<number>, weights: ArrayLike<number>): number {
  let won = 0;
  let badsBelow = 0;
  let goods = 0;
  for (const step of steps(scores, outcome, weights)) {
    won += step.goods * (badsBelow + step.bads / 2);
    badsBelow += step.bads;
    goods += step.goods;
  }
  requireBothClasses(goods, badsBelow);
  return won / (goods * badsBelow);
}

/**
 * Points of the ROC curve: shares of bads and of goods at or below each distinct score, ascending.
 * @param scores n scores, higher = good
 * @param outcome n values, 1 good, 0 bad
 * @param weights n weights of at least 0; absent = 1 each
 * @returns one point for each distinct score; the last has both shares 1
 * @throws NumericError as `auc`
 * @example rocCurve([1, 2, 3], [0, 1, 1])[0] // { score: 1, shareOfBads: 1, shareOfGoods: 0 }
 * Source: as `auc`.
 */
export function rocCurve(
  scores: ArrayLike<number>,
  outcome: ArrayLike<number>,
  weights?: ArrayLike<number>,
): { score: number; shareOfBads: number; shareOfGoods: number }[] {
  const found = steps(scores, outcome, weights);
  const goods = found.reduce((sum, step) => sum + step.goods, 0);
  const bads = found.reduce((sum, step) => sum + step.bads, 0);
  requireBothClasses(goods, bads);
  let g = 0;
  let b = 0;
  return found.map((step) => {
    g += step.goods;
    b += step.bads;
    return { score: step.score, shareOfBads: b / bads, shareOfGoods: g / goods };
  });
}

export interface KolmogorovSmirnov {
  /** The largest distance between the score distributions of bads and goods. */
  readonly ks: number;
  /** The score at which it is reached (rows at or below it against rows above). */
  readonly at: number;
}

/**
 * Kolmogorov-Smirnov statistic between the score distributions of bads and goods. Of several scores with the largest distance the lowest is named.
 * @param scores n scores, higher = good
 * @param outcome n values, 1 good, 0 bad
 * @param weights n weights of at least 0; absent = 1 each
 * @throws NumericError as `auc`
 * @example kolmogorovSmirnov([1, 2, 3, 4], [0, 0, 1, 1]) // { ks: 1, at: 2 }
 * Source: N. V. Smirnov, 1948.
 */
export function kolmogorovSmirnov(
  scores: ArrayLike<number>,
  outcome: ArrayLike<number>,
  weights?: ArrayLike<number>,
): KolmogorovSmirnov {
  if (weights) {
    let best = { ks: 0, at: NaN };
    for (const point of rocCurve(scores, outcome, weights)) {
      const distance = Math.abs(point.shareOfBads - point.shareOfGoods);
      if (distance > best.ks || Number.isNaN(best.at)) best = { ks: distance, at: point.score };
    }
    return best;
  }
  const { goods, bads } = scoresByOutcome(scores, outcome);
  requireBothClasses(goods.length, bads.length);
  let g = 0;
  let b = 0;
  let ks = -1;
  let at = NaN;
  while (g < goods.length || b < bads.length) {
    const score = g < goods.length && (b >= bads.length || goods[g] <= bads[b]) ? goods[g] : bads[b];
    while (g < goods.length && goods[g] === score) g++;
    while (b < bads.length && bads[b] === score) b++;
    const distance = Math.abs(b / bads.length - g / goods.length);
    if (distance > ks) {
      ks = distance;
      at = score;
    }
  }
  return { ks, at };
}

export interface DeLong {
  readonly auc: number;
  readonly standardError: number;
  /** Symmetric interval at `level`, clipped to [0, 1]. */
  readonly lower: number;
  readonly upper: number;
}

export interface PairedDeLong {
  readonly aucs: readonly [number, number];
  /** AUC of a minus AUC of b. */
  readonly difference: number;
  readonly standardError: number;
  readonly z: number;
  readonly pValue: number;
  /** Interval of the difference at 95 %. */
  readonly lower: number;
  readonly upper: number;
  /** 2 x 2 covariance of the two areas. */
  readonly covariance: readonly [readonly [number, number], readonly [number, number]];
}

interface Placements {
  readonly area: number;
  /** For each good the share of bads below it, for each bad the share of goods above it; ties one half. In row order. */
  readonly ofGoods: Float64Array;
  readonly ofBads: Float64Array;
}

/** Number of sorted values below `value`, plus half of those equal to it. */
function midCount(sorted: Float64Array, value: number): number {
  let low = 0;
  let high = sorted.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (sorted[middle] < value) low = middle + 1;
    else high = middle;
  }
  const below = low;
  high = sorted.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (sorted[middle] <= value) low = middle + 1;
    else high = middle;
  }
  return (below + low) / 2;
}

function placements(scores: ArrayLike<number>, outcome: ArrayLike<number>): Placements {
  const { goods, bads } = scoresByOutcome(scores, outcome);
  requireBothClasses(goods.length, bads.length);
  const ofGoods = new Float64Array(goods.length);
  const ofBads = new Float64Array(bads.length);
  let g = 0;
  let b = 0;
  let twice = 0;
  for (let i = 0; i < scores.length; i++) {
    if (outcome[i] === 1) {
      const mid = midCount(bads, scores[i]);
      twice += 2 * mid;
      ofGoods[g++] = mid / bads.length;
    } else {
      ofBads[b++] = 1 - midCount(goods, scores[i]) / goods.length;
    }
  }
  return { area: twice / 2 / (goods.length * bads.length), ofGoods, ofBads };
}

function covariance(a: Float64Array, meanA: number, b: Float64Array, meanB: number): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += (a[i] - meanA) * (b[i] - meanB);
  return sum / (a.length - 1);
}

function covarianceOfAreas(a: Placements, b: Placements): number {
  return (
    covariance(a.ofGoods, a.area, b.ofGoods, b.area) / a.ofGoods.length +
    covariance(a.ofBads, a.area, b.ofBads, b.area) / a.ofBads.length
  );
}

/**
 * AUC with DeLong's standard error (divisors m - 1 and n - 1) and a symmetric interval clipped to [0, 1]. Rows count once each.
 * With a single good or a single bad the standard error does not exist and is NaN, as are the limits.
 * @param scores n scores, higher = good
 * @param outcome n values, 1 good, 0 bad
 * @param level of confidence, strictly between 0 and 1
 * @throws NumericError for one class only, NaN (names its row), different lengths, a level outside
 * @example delong([1, 2, 3, 4, 5], [0, 0, 1, 0, 1]).auc // 0.8333
 * Source: E. R. DeLong, D. M. DeLong and D. L. Clarke-Pearson, Biometrics 44(3):837-845, 1988.
 */
export function delong(scores: ArrayLike<number>, outcome: ArrayLike<number>, level = 0.95): DeLong {
  requireLevel(level);
  const placed = placements(scores, outcome);
  const standardError = Math.sqrt(covarianceOfAreas(placed, placed));
  const reach = normalQuantile(0.5 + level / 2) * standardError;
  return { auc: placed.area, standardError, lower: Math.max(0, placed.area - reach), upper: Math.min(1, placed.area + reach) };
}

/**
 * DeLong's test of two scores on the same rows. Use it on hold-out and out-of-time rows; on rows that both models were developed on only the
 * difference is of use. Two scores that order every pair alike have difference 0, standard error 0, z 0 and p-value 1. With a single good or a
 * single bad standard error, z, p-value and limits are NaN.
 * @param a and b n scores each, higher = good
 * @param outcome n values, 1 good, 0 bad
 * @throws NumericError as `delong`
 * @example pairedDelong([1, 2, 3, 4], [1, 3, 2, 4], [0, 0, 1, 1]).difference // 0.25
 * Source: as `delong`.
 */
export function pairedDelong(a: ArrayLike<number>, b: ArrayLike<number>, outcome: ArrayLike<number>): PairedDeLong {
  const placedA = placements(a, outcome);
  const placedB = placements(b, outcome);
  const varianceA = covarianceOfAreas(placedA, placedA);
  const varianceB = covarianceOfAreas(placedB, placedB);
  const shared = covarianceOfAreas(placedA, placedB);
  const difference = placedA.area - placedB.area;
  const standardError = Math.sqrt(Math.max(0, varianceA + varianceB - 2 * shared));
  // Equal scores leave rounding noise in the variance; a difference of exactly 0 has no test to make.
  const z = difference === 0 ? 0 : difference / standardError;
  const reach = normalQuantile(0.975) * standardError;
  return {
    aucs: [placedA.area, placedB.area],
    difference,
    standardError,
    z,
    pValue: normalTwoSided(z),
    lower: difference - reach,
    upper: difference + reach,
    covariance: [
      [varianceA, shared],
      [shared, varianceB],
    ],
  };
}
