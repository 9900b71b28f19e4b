import type { CharacteristicMonths } from '@tallystone/contracts/binnings/months';
import {
  fewestToRead,
  monthlyDrift,
  readPeriods,
  slotCount,
  type BenchReading,
  type Bins,
  type FineClasses,
  type Period,
  type PeriodCell,
} from '@tallystone/numeric/bench';
import { MINUS, binWords, count, plural, share, signed, woe } from '../../../ui/numbers';
import { type Partition, partitionName } from '../../../ui/partition-mark';

/** The figure of bins by month: what it shows and where everything stands, in pixels. Pure, so that it can be tested without drawing. */

export type Span = 'month' | 'quarter';
export type Measure = 'woe' | 'badRate';

/** As the address says it; null where it says nothing, or something else. */
export const asSpan = (text: string | undefined): Span | null => (text === 'month' || text === 'quarter' ? text : null);
export const asMeasure = (text: string | undefined): Measure | null => (text === 'woe' || text === 'badRate' ? text : null);

const sizes = { right: 24, top: 6, strip: 56, gap: 12, axis: 26, radius: 3.4 } as const;

/** True where the counts are of the slots that the fine classes have now: a split makes more of them. */
export function fits(fine: FineClasses, months: CharacteristicMonths): boolean {
  const [any] = [...months.development, ...months.holdOut];
  return any === undefined || any.rows.length === slotCount(fine);
}

/** By month where at least half of development's cells have enough goods and bads to be read, else by quarter. */
export function usualSpan(fine: FineClasses, bins: Bins, months: CharacteristicMonths): Span {
  const cells = readPeriods(fine, bins, months, 'month')
    .filter(({ partition }) => partition === 'development')
    .flatMap((period) => period.cells.filter(({ rows }) => rows > 0));
  return cells.filter(({ small }) => !small).length * 2 >= cells.length ? 'month' : 'quarter';
}

/** One sentence: how far WOE moves between months, and how much of the figure is too small to be read. */
export function monthsFinding(fine: FineClasses, bins: Bins, months: CharacteristicMonths, periods: readonly Period[]): string {
  const drift = monthlyDrift(fine, bins, months);
  const cells = periods.flatMap((period) => period.cells.filter(({ rows }) => rows > 0));
  const small = cells.filter((cell) => cell.small).length;
  const few =
    small === 0
      ? ''
      : ` ${count(small)} of ${plural(cells.length, 'cell')} ${small === 1 ? 'has' : 'have'} fewer than ${fewestToRead} goods or bads.`;
  if (!drift) return `Too few goods and bads by month to tell how WOE moves.${few}`;
  if (!drift.beyondChance)
    return `WOE moves no more from month to month than chance lets it (${plural(drift.months, 'month')}).${few}`;
  return `WOE moves from month to month by ±${woe(drift.deviation)} beyond chance (${plural(drift.months, 'month')}).${few}`;
}

export interface PeriodRow {
  readonly key: string;
  readonly bin: string;
  readonly period: string;
  readonly partition: Partition;
  readonly cell: PeriodCell;
}

/** The same numbers as a table: a row for every bin, period and partition with rows. */
export function periodRows(reading: BenchReading, periods: readonly Period[]): PeriodRow[] {
  return reading.bins.flatMap(({ label }, bin) =>
    periods.flatMap(({ label: period, partition, cells }) =>
      cells[bin].rows > 0
        ? [{ key: `${bin}|${partition}|${period}`, bin: binWords(label), period, partition, cell: cells[bin] }]
        : [],
    ),
  );
}

export interface DrawnPeriod {
  readonly key: string;
  readonly partition: Partition;
  readonly x: number;
  readonly y: number;
  readonly small: boolean;
  /** From and to of the interval; null for a small cell. */
  readonly interval: readonly [number, number] | null;
  readonly label: string;
}

export interface Strip {
  readonly label: string;
  readonly full: string;
  readonly top: number;
  readonly bottom: number;
  /** Where the bin stands over all of development, and in words. */
  readonly level: number;
  readonly levelWords: string;
  readonly marks: readonly DrawnPeriod[];
}

export interface MonthsDrawing {
  readonly width: number;
  readonly height: number;
  readonly left: number;
  readonly right: number;
  readonly strips: readonly Strip[];
  readonly ticks: readonly { readonly x: number; readonly text: string }[];
  readonly axis: number;
  /** How far the top and the bottom of each strip stand off its level, written. */
  readonly ends: readonly [string, string];
  readonly radius: number;
}

const written: Record<Measure, (value: number | null) => string> = { woe, badRate: (value) => share(value) };

const valueOf = (cell: PeriodCell, measure: Measure): number | null => (measure === 'woe' ? cell.woe : cell.badRate);
const limitsOf = (cell: PeriodCell, measure: Measure): readonly [number, number] | null => {
  if (cell.small) return null;
  const [lower, upper] = measure === 'woe' ? [cell.woeLower, cell.woeUpper] : [cell.badRateLower, cell.badRateUpper];
  return lower === null || upper === null ? null : [lower, upper];
};

/**
 * A strip for each bin that has rows, periods from left to right. Each strip is centred on what the bin is over all of development, and all have the
 * same scale: what can be read decides it, small cells stay inside.
 */
export function drawMonths(
  reading: BenchReading,
  periods: readonly Period[],
  { width, measure }: { readonly width: number; readonly measure: Measure },
): MonthsDrawing {
  const names = [...new Set(periods.map(({ label }) => label))].sort();
  const left = width < 560 ? 104 : 150;
  const right = width - sizes.right;
  const step = (right - left) / Math.max(1, names.length);
  const at = new Map(names.map((name, place) => [name, left + (place + 0.5) * step]));
  const reach = reachOf(reading, periods, measure);
  const radius = Math.max(1.6, Math.min(sizes.radius, step / 3));
  const aside: Record<Partition, number> = { development: -Math.min(4, step / 4), holdOut: Math.min(4, step / 4), outOfTime: 0 };
  const longest = width < 560 ? 14 : 21;
  const shown = reading.bins.flatMap((_, bin) => (periods.some(({ cells }) => cells[bin].rows > 0) ? [bin] : []));
  const strips = shown.map((bin, place): Strip => {
    const top = sizes.top + place * (sizes.strip + sizes.gap);
    const level = levelOf(reading, bin, measure);
    const middle = top + sizes.strip / 2;
    const heightOf = (value: number): number =>
      middle - (sizes.strip / 2) * Math.max(-1, Math.min(1, (value - (level ?? 0)) / reach));
    const full = binWords(reading.bins[bin].label);
    const marks = periods.flatMap(({ label: period, partition, cells }): DrawnPeriod[] => {
      const cell = cells[bin];
      const value = valueOf(cell, measure);
      if (cell.rows === 0 || value === null) return [];
      const limits = limitsOf(cell, measure);
      return [
        {
          key: `${partition}|${period}`,
          partition,
          x: (at.get(period) ?? left) + aside[partition],
          y: heightOf(value),
          small: cell.small,
          interval: limits && [heightOf(limits[0]), heightOf(limits[1])],
          label: cellWords(full, period, partition, cell),
        },
      ];
    });
    return {
      label: full.length > longest ? `${full.slice(0, longest - 1)}…` : full,
      full,
      top,
      bottom: top + sizes.strip,
      level: middle,
      levelWords: level === null ? '' : `${measure === 'woe' ? 'WOE ' : ''}${written[measure](level)}`,
      marks,
    };
  });
  const axis = sizes.top + strips.length * (sizes.strip + sizes.gap);
  return {
    width,
    height: axis + sizes.axis,
    left,
    right,
    strips,
    ticks: shownTicks(names, at, step),
    axis,
    ends: measure === 'woe' ? [signed(reach, 1), signed(-reach, 1)] : [`+${share(reach, 0)}`, `${MINUS}${share(reach, 0)}`],
    radius,
  };
}

const levelOf = ({ bins }: BenchReading, bin: number, measure: Measure): number | null => {
  const over = bins[bin].figures.development;
  return (measure === 'woe' ? over?.woe : over?.badRate) ?? null;
};

/** How far what can be read stands off its level, at most. */
function reachOf(reading: BenchReading, periods: readonly Period[], measure: Measure): number {
  let reach = measure === 'woe' ? 0.2 : 0.02;
  for (const { cells } of periods) {
    cells.forEach((cell, bin) => {
      const level = levelOf(reading, bin, measure);
      const value = valueOf(cell, measure);
      if (level === null || value === null || cell.small) return;
      for (const one of [value, ...(limitsOf(cell, measure) ?? [])]) reach = Math.max(reach, Math.abs(one - level));
    });
  }
  return reach;
}

function cellWords(bin: string, period: string, partition: Partition, cell: PeriodCell): string {
  const interval = cell.woeLower === null ? '' : ` (${woe(cell.woeLower)} to ${woe(cell.woeUpper)})`;
  const few = cell.small ? `; fewer than ${fewestToRead} goods or bads, not to be read alone` : '';
  return `${bin}, ${period}, ${partitionName(partition).toLowerCase()}: WOE ${woe(cell.woe)}${interval}, bad rate ${share(cell.badRate)} of ${plural(cell.rows, 'row')}${few}`;
}

/** As many names of periods as there is room for, the first among them. */
function shownTicks(names: readonly string[], at: ReadonlyMap<string, number>, step: number): { x: number; text: string }[] {
  const every = Math.max(1, Math.ceil(62 / Math.max(1, step)));
  return names.flatMap((name, place) => (place % every === 0 ? [{ x: at.get(name) ?? 0, text: name }] : []));
}
