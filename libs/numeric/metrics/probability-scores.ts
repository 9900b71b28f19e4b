import { requireFinite, requireOutcome, requireSameLength, requireThat, requireWeights } from '../checks';
import { normalTwoSided } from '../distributions/tails';
import { NumericError } from '../errors';
import { ascendingOrder } from './ordering';

/** Probabilities between 0 and 1, outcomes 0 or 1, weights of at least 0, all of one length; returns the total weight. */
export function requireForecast(pd: ArrayLike<number>, outcome: ArrayLike<number>, weights?: ArrayLike<number>): number {
  requireSameLength('outcome', outcome.length, pd.length);
  requireOutcome(outcome);
  if (pd.length === 0) throw new NumericError('no-rows', 'There is no row.', { name: 'pd' });
  for (let i = 0; i < pd.length; i++) {
    if (!(pd[i] >= 0 && pd[i] <= 1))
      throw new NumericError('out-of-range', `pd is ${pd[i]} at index ${i}.`, { name: 'pd', index: i });
  }
  if (!weights) return pd.length;
  requireSameLength('weights', weights.length, pd.length);
  return requireWeights('weights', weights);
}

/**
 * Brier score: weighted mean of (PD - bad)^2, bad = 1 - outcome.
 * @param pd n probabilities of bad
 * @param outcome n values, 1 good, 0 bad
 * @param weights n weights of at least 0; absent = 1 each
 * @returns 0 (every forecast certain and right) to 1
 * @throws NumericError for a PD outside [0, 1] or NaN (names its row), different lengths, no row, weights that add up to 0
 * @example brier([0.1, 0.8], [1, 0]) // 0.025
 * Source: G. W. Brier, Monthly Weather Review 78, 1950.
 */
export function brier(pd: ArrayLike<number>, outcome: ArrayLike<number>, weights?: ArrayLike<number>): number {
  const total = requireForecast(pd, outcome, weights);
  let sum = 0;
  for (let i = 0; i < pd.length; i++) {
    const miss = pd[i] - (1 - outcome[i]);
    sum += (weights ? weights[i] : 1) * miss * miss;
  }
  return sum / total;
}

/**
 * Logarithmic loss: weighted mean of -ln P(what happened). A certain forecast that was wrong gives Infinity.
 * @param pd n probabilities of bad
 * @param outcome n values, 1 good, 0 bad
 * @param weights n weights of at least 0; absent = 1 each
 * @returns nats per row, at least 0
 * @throws NumericError as `brier`
 * @example logLoss([0.5], [1]) // 0.6931
 * Source: I. J. Good, Rational decisions, J. Royal Statistical Society B 14, 1952.
 */
export function logLoss(pd: ArrayLike<number>, outcome: ArrayLike<number>, weights?: ArrayLike<number>): number {
  const total = requireForecast(pd, outcome, weights);
  let sum = 0;
  for (let i = 0; i < pd.length; i++) {
    const weight = weights ? weights[i] : 1;
    if (weight > 0) sum -= weight * (outcome[i] === 1 ? Math.log1p(-pd[i]) : Math.log(pd[i]));
  }
  return sum / total;
}

export interface MurphyDecomposition {
  readonly brier: number;
  readonly reliability: number;
  readonly resolution: number;
  readonly uncertainty: number;
  /** (resolution - reliability) / uncertainty; NaN with one class only. */
  readonly skill: number;
}

/**
 * Murphy's decomposition of grouped forecasts: Brier = reliability - resolution + uncertainty.
 * @param forecast PD of each of G groups, 0 to 1
 * @param rows and bads counts (or weights) of each group, 0 <= bads <= rows; a group without rows adds nothing
 * @throws NumericError for different lengths, values outside or NaN (names the group), no row at all
 * @example murphyOfGroups([0.1, 0.4], [100, 100], [10, 40]).reliability // 0
 * Source: A. H. Murphy, J. Applied Meteorology 12:595-600, 1973.
 */
export function murphyOfGroups(
  forecast: ArrayLike<number>,
  rows: ArrayLike<number>,
  bads: ArrayLike<number>,
): MurphyDecomposition {
  requireSameLength('rows', rows.length, forecast.length);
  requireSameLength('bads', bads.length, forecast.length);
  let total = 0;
  let totalBads = 0;
  for (let g = 0; g < forecast.length; g++) {
    // Sums of weights can miss one another by a rounding.
    const holds = forecast[g] >= 0 && forecast[g] <= 1 && bads[g] >= 0 && bads[g] <= rows[g] * (1 + 1e-9) && rows[g] < Infinity;
    if (!holds) {
      throw new NumericError('out-of-range', `Group ${g} has PD ${forecast[g]}, ${rows[g]} rows and ${bads[g]} bads.`, {
        name: 'groups',
        index: g,
      });
    }
    total += rows[g];
    totalBads += bads[g];
  }
  requireThat(total > 0, 'rows', 'there is no row in any group.');
  const base = totalBads / total;
  let reliability = 0;
  let resolution = 0;
  for (let g = 0; g < forecast.length; g++) {
    if (rows[g] === 0) continue;
    const rate = bads[g] / rows[g];
    reliability += (rows[g] / total) * (forecast[g] - rate) ** 2;
    resolution += (rows[g] / total) * (rate - base) ** 2;
  }
  const uncertainty = base * (1 - base);
  return {
    brier: reliability - resolution + uncertainty,
    reliability,
    resolution,
    uncertainty,
    skill: uncertainty === 0 ? NaN : (resolution - reliability) / uncertainty,
  };
}

/**
 * Murphy's decomposition with rows of equal PD as groups: exact for a scorecard, whose PDs take few values. With equal PDs throughout the resolution
 * is 0 and the reliability the squared distance of the PD from the bad rate.
 * @param pd n probabilities of bad
 * @param outcome n values, 1 good, 0 bad
 * @param weights n weights of at least 0; absent = 1 each
 * @throws NumericError as `brier`
 * @example murphyDecomposition([0.5, 0.5], [1, 0]).reliability // 0
 * Source: as `murphyOfGroups`.
 */
export function murphyDecomposition(
  pd: ArrayLike<number>,
  outcome: ArrayLike<number>,
  weights?: ArrayLike<number>,
): MurphyDecomposition {
  requireForecast(pd, outcome, weights);
  const forecast: number[] = [];
  const rows: number[] = [];
  const bads: number[] = [];
  for (const row of ascendingOrder(pd)) {
    const weight = weights ? weights[row] : 1;
    if (forecast.length === 0 || forecast[forecast.length - 1] !== pd[row]) {
      forecast.push(pd[row]);
      rows.push(0);
      bads.push(0);
    }
    rows[rows.length - 1] += weight;
    bads[bads.length - 1] += weight * (1 - outcome[row]);
  }
  return murphyOfGroups(forecast, rows, bads);
}

/**
 * Spiegelhalter's test of calibration: z of the Brier score against its expectation under the forecasts.
 * @param pd n probabilities of bad
 * @param outcome n values, 1 good, 0 bad
 * @returns z and its two-sided p-value; both NaN when every PD is 0, 1/2 or 1, where the score has no variance to test with
 * @throws NumericError as `brier`
 * @example spiegelhalter([0.2, 0.2, 0.2], [1, 1, 0]).z // 0.5774
 * Source: D. J. Spiegelhalter, Statistics in Medicine 5:421-433, 1986.
 */
export function spiegelhalter(pd: ArrayLike<number>, outcome: ArrayLike<number>): { z: number; pValue: number } {
  requireForecast(pd, outcome);
  requireFinite('pd', pd);
  let numerator = 0;
  let variance = 0;
  for (let i = 0; i < pd.length; i++) {
    const p = pd[i];
    numerator += (1 - outcome[i] - p) * (1 - 2 * p);
    variance += (1 - 2 * p) ** 2 * p * (1 - p);
  }
  const z = numerator / Math.sqrt(variance);
  return { z, pValue: normalTwoSided(z) };
}
