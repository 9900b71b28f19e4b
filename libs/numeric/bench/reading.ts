import { wilsonInterval } from '../metrics/wilson';
import { weightOfEvidence, type Smoothing } from '../binning/weight-of-evidence';
import { binLabels } from './labels';
import { binOfSlots, coarseCount, layoutOf, sumSlots, type BinSums } from './slots';
import { benchStability, type BenchStability } from './stability';
import { giniOfBins, observedTrend, type ObservedTrend } from './trend';
import { partitions, type BinKind, type Bins, type FineClasses, type PartitionName } from './types';

/** What the specification takes when it says nothing else. */
export const usualSmoothing: Smoothing = { amount: 0.5, when: 'zero-cell' };

/** One bin in one partition. */
export interface BinFigures {
  readonly rows: number;
  readonly goods: number;
  readonly bads: number;
  /** Of the partition's rows that are in a bin. */
  readonly share: number;
  /** Weighted bads / (goods + bads), null without rows. */
  readonly badRate: number | null;
  /** Wilson's 95 % interval at the number of rows. */
  readonly lower: number | null;
  readonly upper: number | null;
  /** ln(good:bad); a half is added to both where one of them is 0. Null without rows. */
  readonly logOdds: number | null;
  /** The interval of the bad rate on the scale of log odds (infinite where the interval reaches 0 or 1). */
  readonly logOddsLower: number | null;
  readonly logOddsUpper: number | null;
  /** Of this partition's own counts; null where the partition has no good or no bad. */
  readonly woe: number | null;
  readonly part: number | null;
}

export interface BinOnBench {
  readonly kind: BinKind;
  /** Of the cut bin, the group or the special code. */
  readonly index: number;
  readonly label: string;
  readonly figures: Readonly<Record<PartitionName, BinFigures | null>>;
}

export interface PartitionTotals {
  readonly rows: number;
  readonly goods: number;
  readonly bads: number;
  readonly informationValue: number | null;
  readonly gini: number | null;
  readonly smoothed: boolean;
  /** Rows whose category development has not seen and that stay neutral. */
  readonly outside: number;
}

/** Everything the bench shows about one characteristic, from its fine-class counts. */
export interface BenchReading {
  readonly bins: readonly BinOnBench[];
  readonly totals: Readonly<Record<PartitionName, PartitionTotals | null>>;
  /** Of development. */
  readonly informationValue: number;
  readonly gini: number;
  readonly missingShare: number;
  readonly trend: ObservedTrend;
  /** CSI of hold-out and out-of-time against development. */
  readonly stability: BenchStability;
  /** What every WOE and IV here was calculated with; `smoothed` of a partition says whether it came to that. */
  readonly smoothing: Smoothing;
}

/**
 * Sums the fine classes of a characteristic to its bins and says what they say: the same code in the browser and on the server.
 *
 * @throws NumericError where a cut lies inside a fine class; ZeroCellError where smoothing "never" meets a zero cell
 * @example readBench(fine, bins).informationValue
 */
export function readBench(fine: FineClasses, bins: Bins, smoothing: Smoothing = usualSmoothing): BenchReading {
  const layout = layoutOf(bins);
  const labels = binLabels(fine, bins);
  const slots = binOfSlots(fine, bins);
  const perPartition = partitions.map((name) => {
    const counts = fine[name];
    return counts && readPartition(sumSlots(counts, slots, layout.length), smoothing);
  });
  const development = perPartition[0];
  if (!development) throw new Error('Development counts are missing');
  const coarse = coarseCount(bins);
  const missing = fine.development.rows[fine.development.rows.length - (fine.kind === 'categorical' ? 2 : 1)];
  const allRows = fine.development.rows.reduce((sum, rows) => sum + rows, 0);
  const woe = development.figures.slice(0, coarse).map((bin) => bin.woe ?? 0);
  return {
    bins: layout.map(({ kind, index }, bin) => ({
      kind,
      index,
      label: labels[bin],
      figures: {
        development: development.figures[bin],
        holdOut: perPartition[1]?.figures[bin] ?? null,
        outOfTime: perPartition[2]?.figures[bin] ?? null,
      },
    })),
    totals: {
      development: development.totals,
      holdOut: perPartition[1]?.totals ?? null,
      outOfTime: perPartition[2]?.totals ?? null,
    },
    informationValue: development.totals.informationValue ?? 0,
    gini: development.totals.gini ?? 0,
    missingShare: allRows > 0 ? missing / allRows : 0,
    trend:
      fine.kind === 'categorical'
        ? 'none'
        : observedTrend(
            woe,
            development.figures.slice(0, coarse).map((bin) => bin.rows),
          ),
    stability: benchStability(fine, bins),
    smoothing,
  };
}

function readPartition(sums: BinSums, smoothing: Smoothing): { figures: BinFigures[]; totals: PartitionTotals } {
  const total = { rows: sum(sums.rows), goods: sum(sums.goods), bads: sum(sums.bads) };
  const evidence = total.goods > 0 && total.bads > 0 ? weightOfEvidence(sums.goods, sums.bads, smoothing) : null;
  const figures = Array.from(sums.rows, (rows, bin): BinFigures => {
    const [goods, bads] = [sums.goods[bin], sums.bads[bin]];
    return {
      rows,
      goods,
      bads,
      share: total.rows > 0 ? rows / total.rows : 0,
      ...rateFigures(rows, goods, bads),
      woe: evidence ? evidence.woe[bin] : null,
      part: evidence ? evidence.parts[bin] : null,
    };
  });
  return {
    figures,
    totals: {
      ...total,
      informationValue: evidence ? evidence.informationValue : null,
      gini: evidence ? giniOfBins(sums.goods, sums.bads, evidence.woe) : null,
      smoothed: evidence?.smoothed ?? false,
      outside: sums.outside,
    },
  };
}

type RateFigures = Pick<BinFigures, 'badRate' | 'lower' | 'upper' | 'logOdds' | 'logOddsLower' | 'logOddsUpper'>;

function rateFigures(rows: number, goods: number, bads: number): RateFigures {
  const weight = goods + bads;
  if (!(rows > 0) || !(weight > 0)) {
    return { badRate: null, lower: null, upper: null, logOdds: null, logOddsLower: null, logOddsUpper: null };
  }
  const badRate = bads / weight;
  // The weighted rate, at the precision that the number of rows gives: weights must not pretend to be more observations.
  const { lower, upper } = wilsonInterval(Math.min(rows, badRate * rows), rows);
  const added = goods === 0 || bads === 0 ? 0.5 : 0;
  return {
    badRate,
    lower,
    upper,
    logOdds: Math.log((goods + added) / (bads + added)),
    logOddsLower: Math.log((1 - upper) / upper),
    logOddsUpper: Math.log((1 - lower) / lower),
  };
}

function sum(values: Float64Array): number {
  let total = 0;
  for (const value of values) total += value;
  return total;
}
