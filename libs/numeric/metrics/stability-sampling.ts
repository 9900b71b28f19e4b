import { requireThat } from '../checks';
import { chiSquareQuantile, chiSquareTail } from '../distributions/tails';

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
