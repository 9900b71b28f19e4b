import type { HalvesRow, PartitionAuc } from '@tallystone/contracts/validation/schema';
import type { PartitionName, Result, ResultMetrics } from '@tallystone/contracts/result/types';
import { normalQuantile } from '@tallystone/numeric';
import type { Difference } from '../../replay/comparison';

const mostDifferences = 200;

/**
 * The two halves as rows: intercept, penalty, every coefficient kept by either half with its points; after them whatever else differs. Each
 * row is judged as the comparison judges it: |difference| <= tolerance x max(1, |modeller's|), whole numbers equal.
 */
export function halvesOf(modeller: Result, validator: Result, differences: readonly Difference[], tolerance: number): HalvesRow[] {
  const differing = new Set(differences.map(({ path }) => path));
  const shown = new Set<string>();
  const row = (place: string, label: string, a: number | null, b: number | null): HalvesRow => {
    shown.add(place);
    const exact = a !== null && Number.isInteger(a) && b !== null && Number.isInteger(b);
    return {
      place,
      label,
      modeller: a,
      validator: b,
      difference: a === null || b === null ? null : Math.abs(a - b),
      tolerance: exact ? 0 : tolerance * Math.max(1, Math.abs(a ?? 0)),
      meets: !differing.has(place),
    };
  };
  const rows = [row('intercept', 'Intercept', modeller.intercept, validator.intercept), row('lambda', 'Penalty', modeller.lambda, validator.lambda)];
  modeller.characteristics.forEach((own, index) => {
    const other = validator.characteristics[index];
    if (!own.coefficient && !other?.coefficient) return;
    rows.push(row(`characteristics[${index}].coefficient`, own.column, own.coefficient, other?.coefficient ?? null));
    own.bins.forEach((bin, place) => {
      const there = other?.bins[place];
      rows.push(
        row(`characteristics[${index}].bins[${place}].pointsRounded`, `${own.column}, ${bin.label}: points`, bin.pointsRounded, there?.pointsRounded ?? null),
      );
    });
  });
  const others = differences
    .filter(({ path }) => !shown.has(path))
    .slice(0, mostDifferences)
    .map(({ path, expected, actual, difference }): HalvesRow => ({
      place: path,
      label: path,
      modeller: typeof expected === 'number' ? expected : null,
      validator: typeof actual === 'number' ? actual : null,
      difference,
      tolerance,
      meets: false,
    }));
  return [...rows, ...others];
}

const z95 = normalQuantile(0.975);

/** Discrimination and calibration by partition with DeLong's 95 % interval, from a result. */
export function performanceOf(result: Result, partitions: readonly PartitionName[]): PartitionAuc[] {
  return partitions.flatMap((partition): PartitionAuc[] => {
    const metrics: ResultMetrics | null = result.metrics[partition];
    if (metrics === null) return [];
    const { goods, bads } = result.counts[partition];
    const error = metrics.aucStandardError;
    return [
      {
        partition,
        rows: goods + bads,
        goods,
        bads,
        auc: metrics.auc,
        standardError: error,
        lower: error === null ? null : Math.max(0, metrics.auc - z95 * error),
        upper: error === null ? null : Math.min(1, metrics.auc + z95 * error),
        ks: metrics.ks,
        brier: metrics.brier,
        calibrationInTheLarge: metrics.calibrationInTheLarge,
        calibrationSlope: metrics.calibrationSlope,
        hosmerLemeshow: metrics.hosmerLemeshow,
      },
    ];
  });
}
