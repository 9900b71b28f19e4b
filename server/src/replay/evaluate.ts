import type { MetricsByPartition, PartitionName } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import { etaOf, modelTables, type ModelTables } from './design';
import { knownRows } from './fit-rows';
import { gather, gatherNumbers } from './gather';
import { measure } from './metrics';
import { pointsOf, roundedScores, type PointsTable } from './points';
import { DEVELOPMENT, HOLD_OUT, OUT_OF_TIME, type CodeMatrix, type Model, type Prepared, type Term } from './types';
import type { WoeTable } from './woe';

/** Rows with known outcome of one partition. */
export interface PartitionRows {
  rows: Uint32Array;
  outcome: Uint8Array;
  weights: Float64Array | null;
}

export interface PartitionScores {
  eta: Float64Array;
  scores: Float64Array;
  rounded: Float64Array | null;
}

export interface Evaluation {
  tables: ModelTables;
  points: PointsTable;
  /** In the order of `evaluator.partitions[name].rows`. */
  scores: Record<PartitionName, PartitionScores>;
  metrics: MetricsByPartition;
  weightedMetrics: MetricsByPartition | null;
}

export const PARTITION_NAMES: readonly PartitionName[] = ['development', 'holdOut', 'outOfTime'];

/** What is the same for every model on one sample and code matrix, made once. */
export interface Evaluator {
  spec: Pick<Specification, 'scaling' | 'weight'>;
  coded: CodeMatrix;
  woe: readonly (WoeTable | null)[];
  partitions: Record<PartitionName, PartitionRows>;
}

export function evaluatorOf(
  spec: Pick<Specification, 'scaling' | 'weight'>,
  prepared: Prepared,
  coded: CodeMatrix,
  woe: readonly (WoeTable | null)[],
): Evaluator {
  const rowsOf = (wanted: number): PartitionRows => {
    const rows = knownRows(prepared, (partition) => partition === wanted);
    return {
      rows,
      outcome: gather(prepared.outcome, rows),
      weights: prepared.weights === null ? null : gatherNumbers(prepared.weights, rows),
    };
  };
  return {
    spec,
    coded,
    woe,
    partitions: { development: rowsOf(DEVELOPMENT), holdOut: rowsOf(HOLD_OUT), outOfTime: rowsOf(OUT_OF_TIME) },
  };
}

/**
 * Scores and all figures of one model by partition: table look-ups, no refit.
 * @param options.figures "path" leaves out DeLong's error and Hosmer-Lemeshow; `partitions` limits the work (others have null metrics)
 * @example
 * const evaluator = evaluatorOf(specification, prepared, coded, trained.tables);
 * trained.fits.map((fit) => evaluateFit(evaluator, trained.terms, fit, { figures: 'path' }).metrics.holdOut?.auc);
 */
export function evaluateFit(
  evaluator: Evaluator,
  terms: readonly Term[],
  model: Model,
  options: { figures?: 'all' | 'path'; partitions?: readonly PartitionName[] } = {},
): Evaluation {
  const { spec, coded, woe, partitions } = evaluator;
  const tables = modelTables(model, terms, coded, woe);
  const points = pointsOf(spec.scaling, tables, coded);
  const wanted = new Set(options.partitions ?? PARTITION_NAMES);
  const scores = {} as Record<PartitionName, PartitionScores>;
  const metrics: MetricsByPartition = { development: null, holdOut: null, outOfTime: null };
  const weighted: MetricsByPartition = { development: null, holdOut: null, outOfTime: null };
  for (const name of PARTITION_NAMES) {
    const { rows, outcome, weights } = partitions[name];
    const taken = wanted.has(name) ? rows : new Uint32Array(0);
    const eta = etaOf(tables, coded, taken);
    const unrounded = eta.map((value) => points.offset + points.factor * value);
    const rounded = points.isScorecard ? roundedScores(points, coded, taken) : null;
    scores[name] = { eta, scores: unrounded, rounded };
    if (taken.length === 0) continue;
    const measured = { eta, scores: unrounded, rounded, outcome, development: name === 'development' };
    metrics[name] = measure({ ...measured, weights: null }, options.figures);
    if (weights !== null) weighted[name] = measure({ ...measured, weights }, options.figures);
  }
  return { tables, points, scores, metrics, weightedMetrics: spec.weight === null ? null : weighted };
}
