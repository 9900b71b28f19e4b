import { brier, calibration, delong, kolmogorovSmirnov, pairedDelong, probabilitiesOfBad } from '@tallystone/numeric';
import type { ComparedMetrics } from '@tallystone/contracts/comparison/schema';
import type { PartitionName } from '@tallystone/contracts/result/types';
import type { BinnedCharacteristic, Specification } from '@tallystone/contracts/specification/types';
import { codeCharacteristics } from '../replay/coding';
import { evaluateFit, evaluatorOf } from '../replay/evaluate';
import { prepare } from '../replay/prepare';
import type { SourceColumn } from '../replay/source';
import { type OtherColumns, type ScoredRows, type SegmentFigures, incumbentFigures, segmentFigures } from './compare-others';
import type { Task } from './task';

/** One fit at the penalty it is compared at; `woe` by bin in the order of its characteristics, as they were fitted. */
export interface FitToCompare {
  readonly specification: Specification;
  readonly rows: number;
  readonly columns: ReadonlyMap<string, SourceColumn>;
  readonly intercept: number;
  readonly coefficients: readonly number[];
  readonly woe: readonly (readonly number[])[];
}

export interface ComparedFitFigures {
  readonly metrics: Readonly<Record<PartitionName, ComparedMetrics | null>>;
  /** Against the first fit; null for the first and where the rows differ. */
  readonly paired: Readonly<Record<PartitionName, { difference: number; lower: number | null; upper: number | null; pValue: number | null } | null>> | null;
}

export interface CompareAnswer {
  readonly sameRows: boolean;
  /** Empty where the fits see other rows. */
  readonly incumbents: readonly { readonly column: string; readonly figures: Readonly<Record<PartitionName, ReturnType<typeof incumbentFigures>>> }[];
  readonly segments: readonly SegmentFigures[];
  readonly fits: readonly ComparedFitFigures[];
}

/**
 * Scores every partition by each fit and holds them against the first on the same rows. DeLong, DeLong and Clarke-Pearson 1988, paired; on
 * development the difference has no p-value, because both fits have seen those outcomes.
 */
export const compareFits: Task<{ fits: readonly FitToCompare[]; partitions: readonly PartitionName[]; others: OtherColumns }, CompareAnswer> = ({ fits, partitions, others }) => {
  const scored = fits.map((fit) => score(fit, partitions));
  const [first] = scored;
  const sameRows = scored.every((other) => partitions.every((name) => sameOutcomes(first[name], other[name])));
  const on = (name: PartitionName): ScoredRows[] => scored.map((own) => own[name]);
  return {
    sameRows,
    incumbents: sameRows
      ? [...others.incumbents.keys()].map((column) => ({
          column,
          figures: byPartition((name) => (partitions.includes(name) ? incumbentFigures(column, others, on(name), name) : null)),
        }))
      : [],
    segments: sameRows ? [...others.segments.keys()].flatMap((column) => segmentFigures(column, others, on('holdOut'))) : [],
    fits: scored.map((own, place) => ({
      metrics: byPartition((name) => (partitions.includes(name) ? metricsOf(own[name].eta, own[name].outcome) : null)),
      paired:
        place === 0 || !sameRows ? null : byPartition((name) => (partitions.includes(name) ? pairOf(own[name].eta, first[name].eta, own[name].outcome, name) : null)),
    })),
  };
};

function score(fit: FitToCompare, partitions: readonly PartitionName[]): Record<PartitionName, ScoredRows> {
  const { specification } = fit;
  const source = { rows: fit.rows, column: (name: string) => fit.columns.get(name) };
  const prepared = prepare(specification, source);
  const coded = codeCharacteristics(specification, source, prepared);
  const tables = (specification.characteristics as BinnedCharacteristic[]).map((_, index) => {
    const woe = Float64Array.from(fit.woe[index]);
    const none = new Float64Array(woe.length);
    return { rows: none, goods: none, bads: none, woe, informationValue: 0 };
  });
  const evaluator = evaluatorOf(specification, prepared, coded, tables);
  const terms = specification.characteristics.map((_, characteristic) => ({ characteristic, kind: 'woe' as const }));
  const model = { intercept: fit.intercept, coefficients: Float64Array.from(fit.coefficients) };
  const { scores } = evaluateFit(evaluator, terms, model, { figures: 'path', partitions });
  return byPartition((name) => ({ eta: scores[name].eta, outcome: evaluator.partitions[name].outcome, rows: evaluator.partitions[name].rows }));
}

const byPartition = <T>(make: (name: PartitionName) => T): Record<PartitionName, T> => ({
  development: make('development'),
  holdOut: make('holdOut'),
  outOfTime: make('outOfTime'),
});

function sameOutcomes(a: ScoredRows, b: ScoredRows): boolean {
  return a.rows.length === b.rows.length && a.rows.every((row, place) => row === b.rows[place] && a.outcome[place] === b.outcome[place]);
}

const hasBoth = (outcome: Uint8Array): boolean => outcome.includes(0) && outcome.includes(1);

function metricsOf(eta: Float64Array, outcome: Uint8Array): ComparedMetrics | null {
  if (!hasBoth(outcome)) return null;
  const area = delong(eta, outcome);
  const pd = probabilitiesOfBad(eta);
  const calibrated = calibration(pd, outcome);
  const usable = calibrated.converged && eta.some((value) => value !== eta[0]);
  return {
    rows: outcome.length,
    bads: outcome.reduce((sum, value) => sum + 1 - value, 0),
    auc: area.auc,
    aucLower: finite(area.lower),
    aucUpper: finite(area.upper),
    ks: kolmogorovSmirnov(eta, outcome).ks,
    brier: brier(pd, outcome),
    calibrationInTheLarge: finite(calibrated.inTheLarge),
    calibrationSlope: usable ? finite(calibrated.slope) : null,
  };
}

function pairOf(own: Float64Array, first: Float64Array, outcome: Uint8Array, name: PartitionName): { difference: number; lower: number | null; upper: number | null; pValue: number | null } | null {
  if (!hasBoth(outcome)) return null;
  const test = pairedDelong(own, first, outcome);
  const tested = name !== 'development';
  return {
    difference: test.difference,
    lower: tested ? finite(test.lower) : null,
    upper: tested ? finite(test.upper) : null,
    pValue: tested ? finite(test.pValue) : null,
  };
}

const finite = (value: number): number | null => (Number.isFinite(value) ? value : null);
