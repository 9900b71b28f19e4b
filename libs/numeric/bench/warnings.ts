import type { BenchReading, BinFigures } from './reading';
import type { MonthlyDrift } from './months';
import { isUnstable, largeChange, stabilityWords } from './stability';
import type { PartitionName } from './types';

export interface SizeLimits {
  readonly smallestShare: number;
  readonly smallestGoods: number;
  readonly smallestBads: number;
}

export type WarningCode =
  | 'small-bin'
  | 'zero-cell'
  | 'not-monotone'
  | 'reversed-in-hold-out'
  | 'reversed-out-of-time'
  | 'unstable-in-hold-out'
  | 'unstable-out-of-time'
  | 'unstable-by-month'
  | 'high-information-value'
  | 'one-bin';

export interface BenchWarning {
  readonly code: WarningCode;
  readonly message: string;
  /** Indices of the bins concerned. */
  readonly bins: readonly number[];
}

/** Above this an information value asks for a look at leakage. Siddiqi 2006, from memory; lender policy. */
export const leakageSuspect = 0.5;
/**
 * From here on WOE that moves from month to month asks for a look: at a coefficient of 1 and 20 points to double the odds about 6 points between one month
 * and the next. A limit of this product, the lender's to set; it has no source.
 */
export const largeMonthlyDrift = 0.2;
/** One-sided 5 % point of the normal distribution: what is smaller is what chance does. */
export const onesidedPoint = 1.6449;

/**
 * What a careful analyst would look at in the bins of one characteristic. Special and missing bins are as large as they are, so only bins of
 * cuts and groups count as small.
 *
 * @param drift how far WOE moves between months; null where that cannot be told
 */
export function benchWarnings(reading: BenchReading, limits: SizeLimits, drift: MonthlyDrift | null = null): BenchWarning[] {
  const warnings: BenchWarning[] = [];
  const filled = reading.bins.filter((bin) => (bin.figures.development?.rows ?? 0) > 0);
  if (filled.length < 2) {
    warnings.push({ code: 'one-bin', message: 'Every development row lies in one bin: it tells nobody apart.', bins: [0] });
    return warnings;
  }
  // Shares are of rows with a known value, as in automatic classing.
  const known = reading.bins.reduce((sum, bin) => sum + (isCoarse(bin.kind) ? (bin.figures.development?.rows ?? 0) : 0), 0);
  const small = indices(reading, (bin, kind) => isCoarse(kind) && bin.rows > 0 && tooSmall(bin, limits, known));
  if (small.length > 0) {
    const names = small.map((bin) => reading.bins[bin].label).join('; ');
    warnings.push({
      code: 'small-bin',
      message: `${small.length === 1 ? 'A bin is' : `${small.length} bins are`} smaller than the constraints allow: ${names}.`,
      bins: small,
    });
  }
  const zero = indices(reading, (bin) => bin.rows > 0 && (bin.goods === 0 || bin.bads === 0));
  if (zero.length > 0) {
    const names = zero.map(
      (bin) => `${reading.bins[bin].label} has no ${reading.bins[bin].figures.development?.goods === 0 ? 'good' : 'bad'}`,
    );
    warnings.push({
      code: 'zero-cell',
      message: `${names.join('; ')}: for WOE, ${reading.smoothing.amount} is added to goods and bads of each bin.`,
      bins: zero,
    });
  }
  if (reading.trend === 'one-peak' || reading.trend === 'one-valley' || reading.trend === 'mixed') {
    const shape =
      reading.trend === 'mixed'
        ? 'changes direction more than once'
        : reading.trend === 'one-peak'
          ? 'rises, then falls'
          : 'falls, then rises';
    warnings.push({ code: 'not-monotone', message: `WOE ${shape} along the values.`, bins: [] });
  }
  for (const [partition, code, words] of [
    ['holdOut', 'reversed-in-hold-out', 'in hold-out'],
    ['outOfTime', 'reversed-out-of-time', 'out of time'],
  ] as const) {
    const bins = reversedBins(reading, partition);
    if (bins.length === 0) continue;
    const names = bins.map((bin) => reading.bins[bin].label).join('; ');
    warnings.push({
      code,
      message: `The order of risk is reversed ${words}, beyond chance, up to and including ${names}.`,
      bins,
    });
  }
  for (const [partition, code] of [
    ['holdOut', 'unstable-in-hold-out'],
    ['outOfTime', 'unstable-out-of-time'],
  ] as const) {
    const index = reading.stability[partition];
    const rows = reading.totals[partition]?.rows ?? 0;
    if (index === null || !isUnstable(index, reading.totals.development?.rows ?? 0, rows, reading.bins.length)) continue;
    const size = index > largeChange ? 'a large' : 'a moderate';
    const emptied = emptyOnOneSide(reading, partition);
    const names = emptied.map(
      (bin) =>
        `${reading.bins[bin].label}: no row of ${reading.bins[bin].figures.development?.rows ? stabilityWords[partition] : 'development'}`,
    );
    if ((reading.totals.development?.outside ?? 0) === 0 && (reading.totals[partition]?.outside ?? 0) > 0)
      names.push('unseen categories: no row of development');
    const smoothed = names.length > 0 ? ` ${names.join('; ')}; half a row is added to every bin.` : '';
    warnings.push({
      code,
      message: `CSI of ${stabilityWords[partition]} against development is ${index.toFixed(2)}, ${size} change (common practice: from 0.10, from 0.25).${smoothed}`,
      bins: emptied,
    });
  }
  if (drift?.beyondChance && drift.deviation >= largeMonthlyDrift) {
    warnings.push({
      code: 'unstable-by-month',
      message: `WOE moves from month to month by ±${drift.deviation.toFixed(2)} beyond chance, over ${drift.months} months (from ±${largeMonthlyDrift.toFixed(2)} to be looked at).`,
      bins: [],
    });
  }
  if (reading.informationValue > leakageSuspect) {
    warnings.push({
      code: 'high-information-value',
      message: 'IV above 0.5: check that the value was known at application.',
      bins: [],
    });
  }
  return warnings;
}

/**
 * Bins that stand the other way round to their neighbour than in development: for numeric bins the neighbour on the axis, for groups the
 * next in order of risk. Counted where the difference of bad rates has the other sign and is beyond chance (two proportions, one-sided 5 %).
 */
export function reversedBins(reading: BenchReading, partition: PartitionName): number[] {
  const places = reading.bins
    .map((bin, index) => ({ bin, index }))
    .filter(({ bin }) => isCoarse(bin.kind) && (bin.figures.development?.rows ?? 0) > 0);
  if (places[0]?.bin.kind === 'group') {
    places.sort((a, b) => (a.bin.figures.development?.badRate ?? 0) - (b.bin.figures.development?.badRate ?? 0));
  }
  const reversed: number[] = [];
  for (let i = 1; i < places.length; i++) {
    const here = places[i].bin.figures;
    const before = places[i - 1].bin.figures;
    const developed = difference(before.development, here.development);
    const seen = difference(before[partition], here[partition]);
    if (developed === null || seen === null || developed.by === 0) continue;
    if (Math.sign(seen.by) === -Math.sign(developed.by) && Math.abs(seen.by) > onesidedPoint * seen.error)
      reversed.push(places[i].index);
  }
  return reversed;
}

/** Bins that have rows in development or in the partition, and none in the other. */
function emptyOnOneSide(reading: BenchReading, partition: PartitionName): number[] {
  return reading.bins.flatMap(({ figures }, bin) =>
    (figures.development?.rows ?? 0) > 0 === (figures[partition]?.rows ?? 0) > 0 ? [] : [bin],
  );
}

function difference(a: BinFigures | null, b: BinFigures | null): { by: number; error: number } | null {
  if (!a || !b || a.badRate === null || b.badRate === null) return null;
  const pooled = (a.badRate * a.rows + b.badRate * b.rows) / (a.rows + b.rows);
  return { by: b.badRate - a.badRate, error: Math.sqrt(pooled * (1 - pooled) * (1 / a.rows + 1 / b.rows)) };
}

function indices(reading: BenchReading, holds: (bin: BinFigures, kind: string) => boolean): number[] {
  return reading.bins.flatMap((bin, index) =>
    bin.figures.development && holds(bin.figures.development, bin.kind) ? [index] : [],
  );
}

function isCoarse(kind: string): boolean {
  return kind === 'cut' || kind === 'group';
}

function tooSmall(bin: BinFigures, limits: SizeLimits, known: number): boolean {
  return (
    bin.rows < limits.smallestShare * known * (1 - 1e-12) || bin.goods < limits.smallestGoods || bin.bads < limits.smallestBads
  );
}

/** Usual reading of IV: under 0.02 none, to 0.1 weak, to 0.3 medium, above strong. N. Siddiqi, Credit Risk Scorecards, Wiley 2006, from memory. */
export function readingOfIv(informationValue: number): 'none' | 'weak' | 'medium' | 'strong' {
  if (informationValue < 0.02) return 'none';
  if (informationValue < 0.1) return 'weak';
  return informationValue < 0.3 ? 'medium' : 'strong';
}
