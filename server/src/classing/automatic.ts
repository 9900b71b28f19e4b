import type { AskedConstraints, Bins, Constraints, Fine, SlotCounts } from '@tallystone/contracts/binnings/bins';
import type { MonthlyCounts } from '@tallystone/contracts/binnings/months';
import type { Warning } from '@tallystone/contracts/binnings/schema';
import {
  type BenchReading,
  benchWarnings,
  monthlyDrift,
  readBench,
  readingInterval,
  readingOfIv,
} from '@tallystone/numeric/bench';
import { classCategories } from '@tallystone/numeric/binning/categories';
import type { TrendCounts } from '@tallystone/numeric/binning/choose-trend';
import { classNumeric } from '@tallystone/numeric/binning/classing';
import { crossValidatedTrend } from '../replay/classing';

export interface ClassedBins {
  readonly bins: Bins;
  /** What was asked for, with the trend it came to. */
  readonly constraints: Constraints;
}

/**
 * Bins of one characteristic under constraints, from its fine classes; special codes and missing in bins of their own. "monotone" is classed
 * both ways and takes the one that is better by the criterion in force; "cross-validated" takes the trend that predicts best what it has not seen.
 */
export function classFine(fine: Fine, asked: AskedConstraints): ClassedBins {
  const own = { special: fine.special.map(() => 'own' as const), missing: 'own' as const };
  const { rows, goods, bads } = fine.development;
  const totals = { goods: sum(goods), bads: sum(bads) };
  if (fine.kind === 'categorical') {
    // Groups are ordered by rate: a trend over them has no meaning of its own.
    const constraints: Constraints = { ...asked, trend: 'any' };
    const categories = fine.categories.map((_, slot) => ({ rows: rows[slot], goods: goods[slot], bads: bads[slot], pooled: fine.categories[slot] === fine.pooled?.name }));
    const { groups } = classCategories(categories, constraints, totals);
    return {
      constraints,
      bins: {
        kind: 'categorical',
        groups: groups.map((group) => group.map((slot) => fine.categories[slot])),
        ...own,
        unseen: 'neutral',
      },
    };
  }
  const { edges, known } = withoutSplits(fine);
  const trends = trendsOf(known, asked, totals);
  const tried = trends.map((trend) => {
    const constraints: Constraints = {
      ...asked,
      trend,
      ...(asked.trend === 'cross-validated' ? { trendBy: 'cross-validation' } : {}),
    };
    return { constraints, ...classNumeric(known, constraints, totals) };
  });
  const best = tried.reduce((a, b) => (b.worth > a.worth ? b : a));
  return { constraints: best.constraints, bins: { kind: 'numeric', edges: best.cuts.map((cut) => edges[cut - 1]), ...own } };
}

/**
 * The fine classes as they were before cuts by hand split them: what automatic classing works on, or no fold and nobody who replays could come to the
 * same bins.
 */
function withoutSplits({ edges, splits = [], development }: Fine): { edges: number[]; known: TrendCounts } {
  const split = new Set(splits);
  const kept = edges.filter((edge) => !split.has(edge));
  const merged = (counts: readonly number[]): number[] => {
    const sums = new Array<number>(kept.length + 1).fill(0);
    let place = 0;
    for (let slot = 0; slot <= edges.length; slot++) {
      sums[place] += counts[slot];
      if (slot < edges.length && !split.has(edges[slot])) place++;
    }
    return sums;
  };
  const { rows, goods, bads, badRows } = development;
  return { edges: kept, known: { rows: merged(rows), goods: merged(goods), bads: merged(bads), badRows: badRows && merged(badRows) } };
}

function trendsOf(
  known: TrendCounts,
  asked: AskedConstraints,
  totals: { goods: number; bads: number },
): Constraints['trend'][] {
  if (asked.trend === 'monotone') return ['rising', 'falling'];
  if (asked.trend !== 'cross-validated') return [asked.trend];
  return [crossValidatedTrend(known, { ...asked, trend: 'any' }, totals)];
}

export interface Summarised {
  readonly summary: {
    informationValue: number;
    informationValueLower: number | null;
    informationValueUpper: number | null;
    reading: ReturnType<typeof readingOfIv>;
    gini: number;
    missingShare: number;
    bins: number;
    trend: ReturnType<typeof readBench>['trend'];
    csiHoldOut: number | null;
    /** Standard deviation of WOE between months beyond chance; null where the sample has no months. */
    monthlyDrift?: number | null;
    warnings: Warning[];
  };
  /** Those that out-of-time figures give: kept apart until they are opened. */
  readonly outOfTimeWarnings: Warning[];
  readonly outOfTimeCsi: number | null;
}

/** All that is counted of a characteristic. Out-of-time lies apart; months are those of development and hold-out. */
export interface Counted {
  readonly fine: Fine;
  readonly outOfTime: SlotCounts;
  /** Null where the sample has none; undefined where they have not been counted yet. */
  readonly months: MonthlyCounts | null | undefined;
}

/** What the list shows about a characteristic: the browser's own calculation, made on the server. */
export function summarise({ fine, outOfTime, months }: Counted, bins: Bins, constraints: Constraints): Summarised {
  const reading = readBench({ ...fine, outOfTime }, bins);
  const drift = months ? monthlyDrift(fine, bins, months) : null;
  const warnings = benchWarnings(reading, constraints, drift).map((warning) => ({ ...warning, bins: [...warning.bins] }));
  return {
    summary: {
      informationValue: reading.informationValue,
      ...spreadOf(reading),
      reading: readingOfIv(reading.informationValue),
      gini: reading.gini,
      missingShare: reading.missingShare,
      bins: reading.bins.length,
      trend: reading.trend,
      csiHoldOut: reading.stability.holdOut,
      ...(months === undefined ? {} : { monthlyDrift: drift?.deviation ?? null }),
      warnings: warnings.filter(({ code }) => !ofOutOfTime.has(code)),
    },
    outOfTimeWarnings: warnings.filter(({ code }) => ofOutOfTime.has(code)),
    outOfTimeCsi: reading.stability.outOfTime,
  };
}

/** Warnings that give out-of-time figures away. */
const ofOutOfTime: ReadonlySet<Warning['code']> = new Set(['reversed-out-of-time', 'unstable-out-of-time']);

/** As the bench shows it, from the same seed: what the list says and what the bench says are one number. */
function spreadOf(reading: BenchReading): { informationValueLower: number | null; informationValueUpper: number | null } {
  const interval = readingInterval(reading);
  return { informationValueLower: interval?.lower ?? null, informationValueUpper: interval?.upper ?? null };
}

function sum(values: readonly number[]): number {
  return values.reduce((total, value) => total + value, 0);
}
