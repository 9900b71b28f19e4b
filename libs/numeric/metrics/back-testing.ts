import { requireFinite, requireThat } from '../checks';
import { betaQuantile, binomialTail, normalCdf, normalQuantile, normalTail } from '../distributions/tails';
import type { Interval } from './intervals';
import { requireLevel, requireShare } from './wilson';

/**
 * Smallest number of bads k with P(X >= k) <= 1 - level for X binomial(rows, pd): from k on, the PD is rejected as too low.
 * @param rows number of obligors, a whole number
 * @param pd probability of bad that is tested, 0 to 1
 * @param level of confidence, strictly between 0 and 1
 * @returns a whole number from 0 to rows + 1; rows + 1 where even all bad would not reject
 * @throws NumericError for arguments outside, and for NaN
 * @example binomialCriticalCount(100, 0.01, 0.95) // 4
 * Source: Basel Committee on Banking Supervision, Working Paper 14, 2005, chapter III. Assumes independent defaults.
 */
export function binomialCriticalCount(rows: number, pd: number, level: number): number {
  requireLevel(level);
  let low = 0;
  let high = rows + 1;
  // Also checks rows and pd: the search is never empty.
  binomialTail(high, rows, pd);
  while (low < high) {
    const middle = Math.floor((low + high) / 2);
    if (binomialTail(middle, rows, pd) <= 1 - level) high = middle;
    else low = middle + 1;
  }
  return low;
}

/**
 * The normal approximation of the binomial critical count: rows pd + z sqrt(rows pd (1 - pd)), not rounded.
 * @param rows number of obligors
 * @param pd probability of bad that is tested, 0 to 1
 * @param level of confidence, strictly between 0 and 1
 * @throws NumericError for arguments outside, and for NaN
 * @example binomialCriticalApproximation(1000, 0.01, 0.95) // 15.175
 * Source: as `binomialCriticalCount`.
 */
export function binomialCriticalApproximation(rows: number, pd: number, level: number): number {
  requireLevel(level);
  requireThat(rows > 0 && pd >= 0 && pd <= 1, 'pd', `rows is ${rows} and pd ${pd}; rows are needed and a pd between 0 and 1.`);
  return rows * pd + normalQuantile(level) * Math.sqrt(rows * pd * (1 - pd));
}

/**
 * Critical default rate of a large portfolio with asset correlation rho: Phi((Phi^-1(pd) + sqrt(rho) Phi^-1(level)) / sqrt(1 - rho)).
 * @param pd strictly between 0 and 1
 * @param correlation rho, from 0 to below 1
 * @param level of confidence, strictly between 0 and 1
 * @returns a rate between 0 and 1; no granularity adjustment
 * @throws NumericError for arguments outside, and for NaN
 * @example oneFactorCriticalRate(0.01, 0.05, 0.95) // 0.022246
 * Source: D. Tasche, A traffic lights approach to PD validation, Deutsche Bundesbank 2003.
 */
export function oneFactorCriticalRate(pd: number, correlation: number, level: number): number {
  requireThat(pd > 0 && pd < 1, 'pd', 'pd lies strictly between 0 and 1.');
  requireThat(correlation >= 0 && correlation < 1, 'correlation', 'correlation lies between 0 and 1.');
  requireLevel(level);
  return normalCdf((normalQuantile(pd) + Math.sqrt(correlation) * normalQuantile(level)) / Math.sqrt(1 - correlation));
}

/**
 * Jeffreys interval of a share; its lower limit is 0 without events and its upper 1 when every row is one.
 * @param events number of events, 0 to rows
 * @param rows number of rows, above 0
 * @param level of confidence, strictly between 0 and 1
 * @throws NumericError for arguments outside, and for NaN
 * @example jeffreysInterval(0, 20) // { lower: 0, upper: 0.1166 }
 * Source: L. D. Brown, T. T. Cai and A. DasGupta, Statistical Science 16, 2001.
 */
export function jeffreysInterval(events: number, rows: number, level = 0.95): Interval {
  requireShare(events, rows);
  requireLevel(level);
  const tail = (1 - level) / 2;
  return {
    lower: events === 0 ? 0 : betaQuantile(tail, events + 0.5, rows - events + 0.5),
    upper: events === rows ? 1 : betaQuantile(1 - tail, events + 0.5, rows - events + 0.5),
  };
}

/**
 * Test that discrimination has fallen below its initial value, which is taken as fixed: S = (initial - current)/standard error of the current AUC.
 * @param initial and current areas, 0 to 1
 * @param standardError of the current area (DeLong), above 0
 * @returns S and its one-sided p-value; a small p says that it has fallen
 * @throws NumericError for arguments outside, and for NaN
 * @example aucChangeTest(0.8, 0.76, 0.03).pValue // 0.0912
 * Source: European Central Bank, Instructions for reporting the validation results of internal models, 2019, 2.5.5 (formula from memory).
 */
export function aucChangeTest(initial: number, current: number, standardError: number): { statistic: number; pValue: number } {
  requireFinite('areas', [initial, current]);
  requireThat(standardError > 0, 'standardError', `the standard error is ${standardError}; it must be above 0.`);
  const statistic = (initial - current) / standardError;
  return { statistic, pValue: normalTail(statistic) };
}

/**
 * Standard error of an AUC from Q1 and Q2. Without them the exponential approximation Q1 = A/(2-A), Q2 = 2A^2/(1+A) is used.
 * @param area AUC, 0 to 1
 * @param bads and goods numbers of rows, at least 1
 * @param q Q1, the probability that two bads both score below a good, and Q2, that a bad scores below two goods
 * @throws NumericError for arguments outside, and for NaN
 * @example hanleyMcNeilStandardError(0.8931710615, 51, 58) // 0.03249
 * Source: J. A. Hanley and B. J. McNeil, Radiology 143:29-36, 1982.
 */
export function hanleyMcNeilStandardError(area: number, bads: number, goods: number, q?: { q1: number; q2: number }): number {
  requireThat(area >= 0 && area <= 1, 'area', `the area is ${area}; it lies between 0 and 1.`);
  requireThat(bads >= 1 && goods >= 1, 'bads', 'a good and a bad are needed.');
  const q1 = q?.q1 ?? area / (2 - area);
  const q2 = q?.q2 ?? (2 * area * area) / (1 + area);
  requireFinite('q', [q1, q2]);
  return Math.sqrt((area * (1 - area) + (bads - 1) * (q1 - area * area) + (goods - 1) * (q2 - area * area)) / (bads * goods));
}

/**
 * Critical distance of the two-sample Kolmogorov-Smirnov test: c sqrt((m + n)/(m n)), c with Kolmogorov's limit law.
 * @param alpha probability of a larger distance by chance, strictly between 0 and 1
 * @param rowsA and rowsB numbers of rows, above 0; the law is that of large samples without ties
 * @throws NumericError for arguments outside, and for NaN
 * @example kolmogorovCriticalDistance(0.05, 300, 700) // 0.093718
 * Source: N. V. Smirnov, 1948; P(K > c) = 2 sum_k (-1)^(k-1) exp(-2 k^2 c^2).
 */
export function kolmogorovCriticalDistance(alpha: number, rowsA: number, rowsB: number): number {
  requireThat(rowsA > 0 && rowsB > 0, 'rows', 'both samples need rows.');
  return kolmogorovCriticalValue(alpha) * Math.sqrt((rowsA + rowsB) / (rowsA * rowsB));
}

/**
 * c with P(K > c) = alpha in Kolmogorov's limit law.
 * @param alpha strictly between 0 and 1
 * @throws NumericError for alpha outside, and for NaN
 * @example kolmogorovCriticalValue(0.05) // 1.3581
 * Source: as `kolmogorovCriticalDistance`.
 */
export function kolmogorovCriticalValue(alpha: number): number {
  requireThat(alpha > 0 && alpha < 1, 'alpha', 'alpha lies strictly between 0 and 1.');
  const tail = (c: number): number => {
    let sum = 0;
    for (let k = 1; k <= 100; k++) sum += (k % 2 === 1 ? 2 : -2) * Math.exp(-2 * k * k * c * c);
    return sum;
  };
  let low = 0.2;
  // The first term of the law alone gives a c that is too large by a little.
  let high = Math.sqrt(-Math.log(alpha / 2) / 2) + 1;
  for (let i = 0; i < 100; i++) {
    const middle = (low + high) / 2;
    if (tail(middle) > alpha) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
