import { populationStability, quantileType7 } from '@tallystone/numeric';
import type { BandCounts, PartitionName, ResultBand } from '@tallystone/contracts/result/types';
import type { Bands } from '@tallystone/contracts/specification/types';
import { PARTITION_NAMES, type Evaluation, type Evaluator } from './evaluate';
import { GOOD, NO_BIN } from './types';

/** Edges of the unrounded score: as stated, or type 7 quantiles of development, each once. */
export function bandEdges(bands: Bands, developmentScores: Float64Array): number[] {
  if (Array.isArray(bands)) return bands;
  if (developmentScores.length === 0) return [];
  const sorted = developmentScores.slice().sort();
  const edges = Array.from({ length: bands.quantiles - 1 }, (_, index) => quantileType7(sorted, (index + 1) / bands.quantiles));
  return edges.filter((edge, index) => index === 0 || edge > edges[index - 1]);
}

/** Lower-closed bands with the counts of known outcomes in every partition, unweighted. */
export function bandsOf(edges: readonly number[], evaluator: Evaluator, evaluation: Evaluation): ResultBand[] {
  const empty = (): BandCounts => ({ rows: 0, goods: 0, bads: 0 });
  const bands = Array.from({ length: edges.length + 1 }, (_, index): ResultBand => ({
    from: index === 0 ? null : edges[index - 1],
    to: index === edges.length ? null : edges[index],
    development: empty(),
    holdOut: empty(),
    outOfTime: empty(),
  }));
  for (const name of PARTITION_NAMES) {
    const { outcome } = evaluator.partitions[name];
    evaluation.scores[name].scores.forEach((score, row) => {
      let band = 0;
      while (band < edges.length && score >= edges[band]) band++;
      const counts = bands[band][name];
      counts.rows++;
      if (outcome[row] === GOOD) counts.goods++;
      else counts.bads++;
    });
  }
  return bands;
}

/** PSI of the score bands against development; null without rows, or where a band is empty on one side and nothing is added. */
export function scoreStability(bands: readonly ResultBand[], name: PartitionName, smoothing: number): number | null {
  return stability(
    bands.map((band) => band.development.rows),
    bands.map((band) => band[name].rows),
    smoothing,
  );
}

/**
 * CSI of one characteristic over its bins, rows counted. Rows in no bin (unseen categories) are one class more as soon as there is one
 * on either side: a shift into values never seen is a shift.
 */
export function characteristicStability(
  codes: Uint8Array,
  bins: number,
  evaluator: Evaluator,
  name: PartitionName,
  smoothing: number,
): number | null {
  const count = (rows: Uint32Array): Float64Array => {
    const counts = new Float64Array(bins + 1);
    for (const row of rows) counts[codes[row] === NO_BIN ? bins : codes[row]]++;
    return counts;
  };
  const expected = count(evaluator.partitions.development.rows);
  const actual = count(evaluator.partitions[name].rows);
  const classes = expected[bins] + actual[bins] > 0 ? bins + 1 : bins;
  return stability(Array.from(expected.slice(0, classes)), Array.from(actual.slice(0, classes)), smoothing);
}

function stability(expected: number[], actual: number[], smoothing: number): number | null {
  const sum = (counts: number[]): number => counts.reduce((total, count) => total + count, 0);
  if (sum(expected) === 0 || sum(actual) === 0) return null;
  return populationStability(expected, actual, smoothing);
}
