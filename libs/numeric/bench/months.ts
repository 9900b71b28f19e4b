import { weightOfEvidence } from '../binning/weight-of-evidence';
import { normalQuantile } from '../distributions/normal';
import { wilsonInterval } from '../metrics/wilson';
import { usualSmoothing } from './reading';
import { binOfSlots, layoutOf, sumSlots, type BinSums } from './slots';
import type { Bins, FineClasses, PartitionName, SlotCounts } from './types';
import { onesidedPoint } from './warnings';

/** Counts of the slots of a characteristic in one month, "2024-03". */
export interface MonthCounts extends SlotCounts {
  readonly month: string;
}

/** Months of each partition, ascending. */
export type MonthsOfPartitions = Readonly<Record<PartitionName, readonly MonthCounts[] | null>>;

/** A cell with fewer goods or bads than this is marked: its figures swing with every row. Common practice, after the rule of five of chi-square tests. */
export const fewestToRead = 5;
const normal = normalQuantile(0.975);

/** One bin in one period of one partition. */
export interface PeriodCell {
  readonly rows: number;
  readonly goods: number;
  readonly bads: number;
  /** Null without rows. */
  readonly badRate: number | null;
  readonly badRateLower: number | null;
  readonly badRateUpper: number | null;
  /** Of this period's own counts; null where the period has no good or no bad. */
  readonly woe: number | null;
  /** 95 % limits by the delta method; null for a small cell. */
  readonly woeLower: number | null;
  readonly woeUpper: number | null;
  /** Fewer than five goods or five bads. */
  readonly small: boolean;
}

export interface Period {
  /** "2024-03", or "2024 Q1". */
  readonly label: string;
  readonly partition: PartitionName;
  /** In the order of the bins. */
  readonly cells: readonly PeriodCell[];
}

/** The quarter of a month. @example quarterOf('2024-03') // '2024 Q1' */
export const quarterOf = (month: string): string => `${month.slice(0, 4)} Q${Math.ceil(Number(month.slice(5, 7)) / 3)}`;

/**
 * Bad rate and WOE of every bin in every month or quarter, by partition, ascending.
 *
 * @throws NumericError where a cut lies inside a fine class
 * @example readPeriods(fine, bins, months, 'quarter')[0] // { label: '2023 Q1', partition: 'development', cells: [...] }
 * Source: WOE as `weightOfEvidence`; the variance of its estimate, 1/g - 1/G + 1/b - 1/B, by the delta method for multinomial shares.
 */
export function readPeriods(fine: FineClasses, bins: Bins, months: MonthsOfPartitions, by: 'month' | 'quarter'): Period[] {
  const slots = binOfSlots(fine, bins);
  const count = layoutOf(bins).length;
  return (['development', 'holdOut', 'outOfTime'] as const).flatMap((partition) => {
    const sums = sumBy(months[partition] ?? [], by === 'month' ? (month) => month : quarterOf, (counts) =>
      sumSlots(counts, slots, count),
    );
    return [...sums].map(([label, sum]) => ({ label, partition, cells: cellsOf(sum) }));
  });
}

/** Sums over the bins by what `labelOf` makes of a month, in the order in which labels first come. */
function sumBy(
  months: readonly MonthCounts[],
  labelOf: (month: string) => string,
  sumsOf: (counts: MonthCounts) => BinSums,
): Map<string, BinSums> {
  const sums = new Map<string, BinSums>();
  for (const counts of months) {
    const label = labelOf(counts.month);
    const known = sums.get(label);
    if (known) add(known, sumsOf(counts));
    else sums.set(label, sumsOf(counts));
  }
  return sums;
}

function add(to: BinSums, from: BinSums): void {
  for (const side of ['rows', 'goods', 'bads'] as const) from[side].forEach((value, bin) => (to[side][bin] += value));
}

/** Weights must not pretend to be more observations: counts at the number of rows. */
function atRows(rows: number, goods: number, bads: number): { goods: number; bads: number } {
  const weight = goods + bads;
  return weight > 0 ? { goods: (goods / weight) * rows, bads: (bads / weight) * rows } : { goods: 0, bads: 0 };
}

function cellsOf({ rows, goods, bads }: BinSums): PeriodCell[] {
  const counted = Array.from(rows, (count, bin) => atRows(count, goods[bin], bads[bin]));
  const all = { goods: total(counted.map((one) => one.goods)), bads: total(counted.map((one) => one.bads)) };
  const told = total(goods) > 0 && total(bads) > 0;
  const woe = told ? weightOfEvidence(goods, bads, usualSmoothing).woe : null;
  return counted.map((one, bin): PeriodCell => {
    const known = rows[bin] > 0 && goods[bin] + bads[bin] > 0;
    const badRate = known ? bads[bin] / (goods[bin] + bads[bin]) : null;
    const limits = known ? wilsonInterval(Math.min(rows[bin], one.bads), rows[bin]) : null;
    const small = one.goods < fewestToRead || one.bads < fewestToRead;
    const value = known && woe ? woe[bin] : null;
    const error = small ? 0 : Math.sqrt(1 / one.goods - 1 / all.goods + 1 / one.bads - 1 / all.bads);
    return {
      rows: rows[bin],
      goods: goods[bin],
      bads: bads[bin],
      badRate,
      badRateLower: limits?.lower ?? null,
      badRateUpper: limits?.upper ?? null,
      woe: value,
      woeLower: value === null || small ? null : value - normal * error,
      woeUpper: value === null || small ? null : value + normal * error,
      small,
    };
  });
}

/** How far WOE moves from month to month. */
export interface MonthlyDrift {
  /** Standard deviation of WOE between months beyond chance, in nats; 0 where the months differ no more than chance lets them. */
  readonly deviation: number;
  /** Pearson's statistic of bin against month, with its degrees of freedom. */
  readonly statistic: number;
  readonly freedom: number;
  /** The statistic lies above its one-sided 5 % point (normal approximation). */
  readonly beyondChance: boolean;
  readonly months: number;
}

/**
 * How far the WOE of bins moves between months, once every month has its own level of risk: months of development and hold-out together. Log odds of
 * bin i in month t are a level of the month plus one of the bin, fitted by maximum likelihood; what Pearson's statistic has above its degrees of freedom
 * is a variance of the log odds between months. Small cells count with the little they say, so that none has to be left out.
 *
 * @returns null with fewer than two months or two bins that have goods and bads
 * @throws NumericError where a cut lies inside a fine class
 * @example monthlyDrift(fine, bins, { development, holdOut })?.deviation // 0.08
 * Source: D. A. Williams, Extra-binomial variation in logistic linear models, Applied Statistics 31, 1982 (method of moments; from memory).
 */
export function monthlyDrift(
  fine: FineClasses,
  bins: Bins,
  months: Pick<MonthsOfPartitions, 'development' | 'holdOut'>,
): MonthlyDrift | null {
  const count = layoutOf(bins).length;
  const slots = binOfSlots(fine, bins);
  const both = [...(months.development ?? []), ...(months.holdOut ?? [])];
  const sums = sumBy(
    both,
    (month) => month,
    (counts) => sumSlots(counts, slots, count),
  );
  const table = [...sums.values()].map(({ rows, goods, bads }) =>
    Array.from(rows, (row, bin) => ({ rows: row, bads: atRows(row, goods[bin], bads[bin]).bads })),
  );
  return driftOf(table);
}

interface Cell {
  readonly rows: number;
  readonly bads: number;
}

/** Rows of the table are months, columns bins. Months and bins with one outcome only say nothing of how the others move. */
function driftOf(table: readonly (readonly Cell[])[]): MonthlyDrift | null {
  const mixed = (cells: readonly Cell[]): boolean => {
    const bads = total(cells.map((cell) => cell.bads));
    const rows = total(cells.map((cell) => cell.rows));
    return bads > 0 && bads < rows;
  };
  let kept: readonly (readonly Cell[])[] = table;
  // Leaving a bin out can leave a month with one outcome, and the other way round: until nothing is left out any more.
  for (let changed = true; changed;) {
    const lines = kept.filter(mixed);
    const used = (lines[0] ?? []).map((_, bin) => mixed(lines.map((line) => line[bin])));
    changed = lines.length < kept.length || used.includes(false);
    kept = lines.map((line) => line.filter((_, bin) => used[bin]));
  }
  const bins = kept[0]?.length ?? 0;
  if (kept.length < 2 || bins < 2) return null;
  const { month, bin } = additive(kept);
  let statistic = 0;
  let information = 0;
  let cells = 0;
  kept.forEach((line, t) => {
    line.forEach((cell, i) => {
      if (cell.rows === 0) return;
      const p = 1 / (1 + Math.exp(-(month[t] + bin[i])));
      const variance = cell.rows * p * (1 - p);
      statistic += (cell.bads - cell.rows * p) ** 2 / variance;
      information += variance;
      cells++;
    });
  });
  const freedom = cells - kept.length - bins + 1;
  if (freedom < 1) return null;
  const variance = (statistic - freedom) / ((information * freedom) / cells);
  return {
    deviation: Math.sqrt(Math.max(0, variance)),
    statistic,
    freedom,
    beyondChance: statistic > freedom + onesidedPoint * Math.sqrt(2 * freedom),
    months: kept.length,
  };
}

/** Log odds of bad as a level of the month plus one of the bin, by maximum likelihood: each level in turn by Newton's method. */
function additive(table: readonly (readonly Cell[])[]): { month: Float64Array; bin: Float64Array } {
  const month = new Float64Array(table.length);
  const bin = new Float64Array(table[0].length);
  const sweeps = 200;
  for (let sweep = 0; sweep < sweeps; sweep++) {
    let moved = 0;
    const turn = (levels: Float64Array, at: number, cells: readonly { cell: Cell; other: number }[]): void => {
      let gradient = 0;
      let curvature = 0;
      for (const { cell, other } of cells) {
        const p = 1 / (1 + Math.exp(-(levels[at] + other)));
        gradient += cell.bads - cell.rows * p;
        curvature += cell.rows * p * (1 - p);
      }
      if (!(curvature > 0)) return;
      const step = Math.max(-2, Math.min(2, gradient / curvature));
      levels[at] += step;
      moved = Math.max(moved, Math.abs(step));
    };
    for (let i = 0; i < bin.length; i++)
      turn(
        bin,
        i,
        table.map((line, t) => ({ cell: line[i], other: month[t] })),
      );
    for (let t = 0; t < month.length; t++)
      turn(
        month,
        t,
        table[t].map((cell, i) => ({ cell, other: bin[i] })),
      );
    if (moved < 1e-9) break;
  }
  return { month, bin };
}

function total(values: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += values[i];
  return sum;
}
