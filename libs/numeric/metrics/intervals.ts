import { requireFinite, requireThat } from '../checks';
import { normalTail } from '../distributions/normal';
import { betaCdf, betaQuantile } from '../distributions/tails';
import { type Interval, wilsonInterval } from './wilson';

export { type Interval, wilsonInterval };

/**
 * Clopper and Pearson's exact interval of a share.
 * @example clopperPearson(0, 20).upper // 0.1684
 * Source: C. J. Clopper and E. S. Pearson, Biometrika 26, 1934.
 */
export function clopperPearson(events: number, rows: number, level = 0.95): Interval {
  requireThat(rows > 0 && events >= 0 && events <= rows, 'events', 'events must lie between 0 and rows.');
  const tail = (1 - level) / 2;
  return {
    lower: events === 0 ? 0 : betaQuantile(tail, events, rows - events + 1),
    upper: events === rows ? 1 : betaQuantile(1 - tail, events + 1, rows - events),
  };
}

/** Bad rate of a bin or band with Wilson's interval; null without rows. */
export function rateInterval(bads: number, rows: number, level = 0.95): (Interval & { readonly rate: number }) | null {
  return rows > 0 ? { rate: bads / rows, ...wilsonInterval(bads, rows, level) } : null;
}

/**
 * Jeffreys test of a PD that may be too low: the posterior probability, under the prior Beta(1/2, 1/2), that the true rate is at most the PD.
 * A small value says that the PD underestimates.
 * @example jeffreysTail(20, 1000, 0.01) // 0.00223
 * Source: European Central Bank, Instructions for reporting the validation results of internal models, February 2019, 2.5.3.
 */
export function jeffreysTail(events: number, rows: number, probability: number): number {
  requireThat(rows > 0 && events >= 0 && events <= rows, 'events', 'events must lie between 0 and rows.');
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
 * @example herfindahl([50, 120, 300, 280, 150, 70, 30]).index // 0.2136
 * Source: European Central Bank, as `jeffreysTail`, 2.5.5.3.
 */
export function herfindahl(counts: ArrayLike<number>): Concentration {
  requireFinite('counts', counts);
  const bands = counts.length;
  requireThat(bands >= 2, 'counts', 'at least two bands are needed.');
  const total = Array.from(counts).reduce((sum, count) => sum + count, 0);
  requireThat(total > 0, 'counts', 'counts add up to zero.');
  const shares = Array.from(counts, (count) => count / total);
  const index = shares.reduce((sum, share) => sum + share * share, 0);
  const variation = Math.sqrt(bands * shares.reduce((sum, share) => sum + (share - 1 / bands) ** 2, 0));
  return { index, coefficientOfVariation: variation, relative: 1 + Math.log(index) / Math.log(bands) };
}

/**
 * Test that concentration has risen over the initial one; small p = more concentrated.
 * Source: European Central Bank, as `herfindahl`.
 */
export function concentrationTest(initial: ArrayLike<number>, current: ArrayLike<number>): { z: number; pValue: number } {
  const before = herfindahl(initial).coefficientOfVariation;
  const now = herfindahl(current).coefficientOfVariation;
  const z = (Math.sqrt(current.length - 1) * (now - before)) / Math.sqrt(now * now * (0.5 + now * now));
  return { z, pValue: normalTail(z) };
}

/**
 * Ratio of each group's selection rate to the largest (adverse impact ratio), and whether it falls below `threshold`. A ratio that differs from
 * the threshold by rounding of the division alone is not flagged.
 * @example impactRatios([0.6, 0.48]) // [{ ratio: 1, below: false }, { ratio: 0.8, below: false }]
 * Source: 29 CFR 1607.4(D); 44 FR 11996 (1979), questions 11 and 12. An aid to judgement: the law that applies to the lender governs.
 */
export function impactRatios(rates: readonly number[], threshold = 0.8): { ratio: number; below: boolean }[] {
  requireFinite('rates', rates);
  const largest = Math.max(...rates);
  requireThat(largest > 0, 'rates', 'every selection rate is 0.');
  return rates.map((rate) => ({ ratio: rate / largest, below: rate < threshold * largest * (1 - 4 * Number.EPSILON) }));
}
