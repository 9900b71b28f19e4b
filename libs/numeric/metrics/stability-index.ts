import { requireFinite, requireSameLength, requireThat } from '../checks';
import { chiSquareQuantile, chiSquareTail } from '../distributions/tails';

export interface StabilityPart {
  readonly expectedShare: number;
  readonly actualShare: number;
  /** null where one side is empty. */
  readonly part: number | null;
}

/**
 * Population stability index of counts by band: sum (a_i - e_i) ln(a_i / e_i) with shares a and e.
 *
 * A band empty on both sides adds 0; a band empty on one side gives null unless a smoothing is stated, which is added to each count on both
 * sides. Used for characteristics (CSI) in the same way.
 * @param expected counts of the development sample by band, each at least 0
 * @param actual counts of the compared sample by band
 * @param smoothing added to each count on both sides, at least 0
 * @throws NumericError for different lengths, negative counts, NaN (names its band), an empty side
 * @example populationStability([100, 200, 300], [120, 180, 300]) // about 0.0096
 * Source: S. Kullback and R. A. Leibler, 1951 (symmetric divergence); its use as an index of stability is common practice in the trade.
 */
export function populationStability(expected: ArrayLike<number>, actual: ArrayLike<number>, smoothing = 0): number | null {
  const parts = stabilityParts(expected, actual, smoothing);
  return parts.some(({ part }) => part === null) ? null : parts.reduce((sum, { part }) => sum + (part ?? 0), 0);
}

/**
 * What each band adds to the population stability index, with its two shares.
 * @param expected and actual counts by band; smoothing as for `populationStability`
 * @throws NumericError as `populationStability`
 * @example stabilityParts([10, 0], [10, 5])[1].part // null
 * Source: as `populationStability`.
 */
export function stabilityParts(expected: ArrayLike<number>, actual: ArrayLike<number>, smoothing = 0): StabilityPart[] {
  requireSameLength('actual', actual.length, expected.length);
  requireFinite('expected', expected);
  requireFinite('actual', actual);
  requireThat(smoothing >= 0, 'smoothing', 'smoothing must be at least 0.');
  let totalExpected = 0;
  let totalActual = 0;
  for (let i = 0; i < expected.length; i++) {
    requireThat(expected[i] >= 0 && actual[i] >= 0, 'expected', `band ${i} has a negative count.`);
    totalExpected += expected[i] + smoothing;
    totalActual += actual[i] + smoothing;
  }
  requireThat(totalExpected > 0, 'expected', 'expected adds up to zero.');
  requireThat(totalActual > 0, 'actual', 'actual adds up to zero.');
  return Array.from(expected, (count, i) => {
    const expectedShare = (count + smoothing) / totalExpected;
    const actualShare = (actual[i] + smoothing) / totalActual;
    if (expectedShare === 0 && actualShare === 0) return { expectedShare, actualShare, part: 0 };
    if (expectedShare === 0 || actualShare === 0) return { expectedShare, actualShare, part: null };
    return { expectedShare, actualShare, part: (actualShare - expectedShare) * Math.log(actualShare / expectedShare) };
  });
}

/** 1/N + 1/M: what the index of two samples from one population is a chi-square times of. */
function samplingUnit(rowsExpected: number, rowsActual: number, bands: number): number {
  requireThat(Number.isInteger(bands) && bands >= 2, 'bands', 'at least two bands are needed.');
  requireThat(rowsExpected > 0 && rowsActual > 0, 'rows', 'both samples need rows.');
  return 1 / rowsExpected + 1 / rowsActual;
}

/**
 * The value the stability index stays below with probability `level` when both samples come from one population:
 * chi-square quantile with B - 1 degrees of freedom times (1/N + 1/M). It holds for samples large enough that no band is nearly empty.
 * @param rowsExpected rows N of the development sample (unweighted)
 * @param rowsActual rows M of the compared sample (unweighted)
 * @param bands B, the number of bands
 * @param level probability, for instance 0.95
 * @throws NumericError for fewer than two bands, no rows, a level outside [0, 1]
 * @example stabilityCriticalValue(1000, 1000, 10, 0.95) // 0.033838
 * Source: B. Yurdakul, Statistical Properties of Population Stability Index, Western Michigan University 2018.
 */
export function stabilityCriticalValue(rowsExpected: number, rowsActual: number, bands: number, level: number): number {
  return chiSquareQuantile(level, bands - 1) * samplingUnit(rowsExpected, rowsActual, bands);
}

export interface StabilitySampling {
  /** What the index is on average when nothing has changed: (B - 1)(1/N + 1/M). */
  readonly expectation: number;
  readonly standardDeviation: number;
  /** Probability of an index at least as large when nothing has changed. */
  readonly pValue: number;
}

/**
 * The sampling law of the stability index when both samples come from one population: (1/N + 1/M) times a chi-square with B - 1 degrees of freedom.
 * @param index a population or characteristic stability index without smoothing
 * @param rowsExpected rows N of the development sample (unweighted)
 * @param rowsActual rows M of the compared sample (unweighted)
 * @param bands B, the number of bands
 * @throws NumericError for fewer than two bands, no rows, a negative index or NaN
 * @example stabilitySampling(0.033838, 1000, 1000, 10).pValue // 0.05
 * Source: as `stabilityCriticalValue`.
 */
export function stabilitySampling(index: number, rowsExpected: number, rowsActual: number, bands: number): StabilitySampling {
  requireThat(index >= 0, 'index', `a stability index is a number of at least 0, not ${index}.`);
  const unit = samplingUnit(rowsExpected, rowsActual, bands);
  return {
    expectation: (bands - 1) * unit,
    standardDeviation: Math.sqrt(2 * (bands - 1)) * unit,
    pValue: chiSquareTail(index / unit, bands - 1),
  };
}
