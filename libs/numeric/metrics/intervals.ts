import { requireFinite, requireSameLength, requireThat } from '../checks';
import { normalTail } from '../distributions/normal';
import { betaCdf, betaQuantile } from '../distributions/tails';
import { type Interval, requireLevel, requireShare, wilsonInterval } from './wilson';

export { type Interval, wilsonInterval };

/**
 * Clopper and Pearson's exact interval of a share.
 * @param events number of events, 0 to rows
 * @param rows number of rows, above 0
 * @param level of confidence, strictly between 0 and 1
 * @throws NumericError for arguments outside, and for NaN
 * @example clopperPearson(0, 20).upper // 0.1684
 * Source: C. J. Clopper and E. S. Pearson, Biometrika 26, 1934.
 */
export function clopperPearson(events: number, rows: number, level = 0.95): Interval {
  requireShare(events, rows);
  requireLevel(level);
  const tail = (1 - level) / 2;
  return {
    lower: events === 0 ? 0 : betaQuantile(tail, events, rows - events + 1),
    upper: events === rows ? 1 : betaQuantile(1 - tail, events + 1, rows - events),
  };
}

/**
 * Bad rate of a bin or band with Wilson's interval.
 * @param bads number of bads, 0 to rows
 * @param rows number of rows
 * @returns null without rows
 * @throws NumericError as `wilsonInterval`
 * @example rateInterval(5, 50)?.rate // 0.1
 * Source: as `wilsonInterval`.
 */
export function rateInterval(bads: number, rows: number, level = 0.95): (Interval & { readonly rate: number }) | null {
  if (rows === 0 && bads === 0) return null;
  return { rate: bads / rows, ...wilsonInterval(bads, rows, level) };
}

/**
 * Jeffreys test of a PD that may be too low: the posterior probability, under the prior Beta(1/2, 1/2), that the true rate is at most the PD.
 * A small value says that the PD underestimates.
 * @param events number of bads, 0 to rows
 * @param rows number of rows, above 0
 * @param probability the PD that is tested, 0 to 1
 * @throws NumericError for arguments outside, and for NaN
 * @example jeffreysTail(20, 1000, 0.01) // 0.00223
 * Source: European Central Bank, Instructions for reporting the validation results of internal models, February 2019, 2.5.3.
 */
export function jeffreysTail(events: number, rows: number, probability: number): number {
  requireShare(events, rows);
  requireThat(probability >= 0 && probability <= 1, 'probability', `a probability lies between 0 and 1, not at ${probability}.`);
  return betaCdf(probability, events + 0.5, rows - events + 0.5);
}

export interface Concentration {
  /** Sum of squared shares. */
  readonly index: number;
  /** Coefficient of variation of the shares. */
  readonly coefficientOfVariation: number;
  /** 1 + ln(index)/ln K: 0 for equal shares, 1 for all in one. */
  readonly relative: number;
}

/**
 * Herfindahl concentration of counts over K bands.
 * @param counts K numbers of at least 0, in rows or in money, K at least 2
 * @throws NumericError for fewer than two bands, a negative count or NaN (names its band), no rows at all
 * @example herfindahl([50, 120, 300, 280, 150, 70, 30]).index // 0.2136
 * Source: European Central Bank, as `jeffreysTail`, 2.5.5.3.
 */
export function herfindahl(counts: ArrayLike<number>): Concentration {
  requireFinite('counts', counts);
  const bands = counts.length;
  requireThat(bands >= 2, 'counts', 'at least two bands are needed.');
  Array.from(counts).forEach((count, i) => requireThat(count >= 0, 'counts', `band ${i} has a negative count.`));
  const total = Array.from(counts).reduce((sum, count) => sum + count, 0);
  requireThat(total > 0, 'counts', 'counts add up to zero.');
  const shares = Array.from(counts, (count) => count / total);
  const index = shares.reduce((sum, share) => sum + share * share, 0);
  const variation = Math.sqrt(bands * shares.reduce((sum, share) => sum + (share - 1 / bands) ** 2, 0));
  return { index, coefficientOfVariation: variation, relative: 1 + Math.log(index) / Math.log(bands) };
}

/**
 * Test that concentration has risen over the initial one, which is taken as fixed.
 * @param initial counts of K bands
 * @param current counts of the same K bands
 * @returns z and its one-sided p-value; a small p says more concentrated. Equal current shares are as little concentrated as can be: p 1, or 1/2 where
 *   the initial ones were equal too.
 * @throws NumericError as `herfindahl`, and for different numbers of bands
 * @example concentrationTest([80, 130, 270, 260, 150, 80, 30], [50, 120, 300, 280, 150, 70, 30]).pValue // 0.3535
 * Source: European Central Bank, as `herfindahl`.
 */
export function concentrationTest(initial: ArrayLike<number>, current: ArrayLike<number>): { z: number; pValue: number } {
  requireSameLength('current', current.length, initial.length);
  const before = herfindahl(initial).coefficientOfVariation;
  const now = herfindahl(current).coefficientOfVariation;
  const rise = Math.sqrt(current.length - 1) * (now - before);
  const z = rise === 0 ? 0 : rise / Math.sqrt(now * now * (0.5 + now * now));
  return { z, pValue: normalTail(z) };
}

/**
 * Ratio of each group's selection rate to the largest (adverse impact ratio), and whether it falls below `threshold`. A ratio that differs from
 * the threshold by rounding of the division alone is not flagged.
 * @param rates selection rates, 0 to 1, one at least above 0
 * @param threshold 0.8 is the four-fifths rule
 * @throws NumericError for rates outside or NaN, and when every rate is 0
 * @example impactRatios([0.6, 0.48]) // [{ ratio: 1, below: false }, { ratio: 0.8, below: false }]
 * Source: 29 CFR 1607.4(D); 44 FR 11996 (1979), questions 11 and 12. An aid to judgement: the law that applies to the lender governs.
 */
export function impactRatios(rates: readonly number[], threshold = 0.8): { ratio: number; below: boolean }[] {
  requireFinite('rates', rates);
  rates.forEach((rate, i) =>
    requireThat(rate >= 0 && rate <= 1, 'rates', `selection rate ${i} is ${rate}; it lies between 0 and 1.`),
  );
  const largest = Math.max(0, ...rates);
  requireThat(largest > 0, 'rates', 'every selection rate is 0.');
  return rates.map((rate) => ({ ratio: rate / largest, below: rate < threshold * largest * (1 - 4 * Number.EPSILON) }));
}
