import { requireFinite, requireSameLength, requireThat } from '../checks';

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
