import { requireFinite, requireOutcome, requireSameLength } from '../checks';
import { NumericError } from '../errors';

/** Which end of a bin belongs to it: "left" is [a, b), "right" is (a, b]. */
export type Closure = 'left' | 'right';

/**
 * The bin of one value: the number of edges at or below it (left-closed), or below it (right-closed).
 * @param value a known value; it may be infinite
 * @param edges strictly ascending; k edges make k + 1 bins, numbered from 0
 * @param closed which end of a bin belongs to it
 * @throws NumericError for NaN
 * @example binOf(30, [25, 30, 37], 'left') // 2
 * @example binOf(30, [25, 30, 37], 'right') // 1
 */
export function binOf(value: number, edges: readonly number[], closed: Closure): number {
  if (Number.isNaN(value)) throw new NumericError('not-a-number', 'A value that is not known has no bin.', { name: 'value' });
  let low = 0;
  let high = edges.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    const below = closed === 'left' ? edges[middle] <= value : edges[middle] < value;
    if (below) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** Edges must be finite and strictly ascending, at most 255 of them (a bin is one byte). @throws NumericError that names the edge */
export function requireEdges(edges: readonly number[]): void {
  if (edges.length > 255) throw new NumericError('out-of-range', `${edges.length} edges; 255 is the most.`, { name: 'edges' });
  edges.forEach((edge, i) => {
    if (!Number.isFinite(edge)) throw new NumericError('not-a-number', `Edge ${i} is ${edge}.`, { name: 'edges', index: i });
    if (i > 0 && edge <= edges[i - 1])
      throw new NumericError('out-of-range', `Edge ${i} is not above the one before.`, { name: 'edges', index: i });
  });
}

/**
 * Bins of a column of known values, one byte each. Missing and special values are the caller's: a NaN here is an error.
 * @throws NumericError for unordered edges or a NaN, which names its row (from 0)
 * @example assignBins(Float64Array.of(24, 25, 40), [25, 30, 37], 'left') // [0, 1, 3]
 */
export function assignBins(values: Float64Array, edges: readonly number[], closed: Closure): Uint8Array {
  requireEdges(edges);
  const bins = new Uint8Array(values.length);
  for (let i = 0; i < values.length; i++) {
    const value = values[i];
    if (Number.isNaN(value)) throw new NumericError('not-a-number', `values has NaN at row ${i}.`, { name: 'values', index: i });
    bins[i] = binOf(value, edges, closed);
  }
  return bins;
}

export interface BinCounts {
  readonly rows: Float64Array;
  readonly goods: Float64Array;
  readonly bads: Float64Array;
}

/**
 * Rows (unweighted) and goods and bads (weighted) of each bin.
 * @param bins bin of each of n rows, a whole number from 0 to below `count`
 * @param outcome n values, 1 good, 0 bad
 * @param count number of bins
 * @param weights n weights of at least 0; absent = 1 each
 * @throws NumericError for different lengths, a bin or an outcome outside, a weight that is negative or NaN (names its row)
 * @example countBins([0, 1, 1], [1, 0, 1], 2).bads // [0, 1]
 */
export function countBins(
  bins: ArrayLike<number>,
  outcome: ArrayLike<number>,
  count: number,
  weights?: ArrayLike<number>,
): BinCounts {
  requireSameLength('outcome', outcome.length, bins.length);
  requireOutcome(outcome);
  if (weights) {
    requireSameLength('weights', weights.length, bins.length);
    requireFinite('weights', weights);
  }
  const rows = new Float64Array(count);
  const goods = new Float64Array(count);
  const bads = new Float64Array(count);
  for (let i = 0; i < bins.length; i++) {
    const bin = bins[i];
    if (!(bin >= 0 && bin < count && Number.isInteger(bin)))
      throw new NumericError('out-of-range', `Row ${i} lies in bin ${bin} of ${count}.`, { name: 'bins', index: i });
    const weight = weights ? weights[i] : 1;
    if (weight < 0) throw new NumericError('out-of-range', `Row ${i} has weight ${weight}.`, { name: 'weights', index: i });
    rows[bin] += 1;
    if (outcome[i] === 1) goods[bin] += weight;
    else bads[bin] += weight;
  }
  return { rows, goods, bads };
}
