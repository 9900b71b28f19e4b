import { requireFinite, requireSameLength, requireThat } from '../checks';
import { NumericError } from '../errors';

/**
 * Edges of fine classes: cuts at the quantiles of the known values, left-closed, at most `count` classes, each edge the shortest decimal that still
 * separates the two values on its sides. A variable with at most `count` different values gets one class for each.
 * @param values known values only, in any order
 * @param count most classes wanted, 1 to 250
 * @returns strictly ascending edges, at most count - 1
 * @throws NumericError for no value, NaN or an infinite one (names its place), a count outside
 * @example fineEdges(Float64Array.of(1.237, 1.81, 2.46, 9.9), 4) // [1.8, 2, 9]
 */
export function fineEdges(values: Float64Array, count: number): number[] {
  if (values.length === 0) throw new NumericError('no-rows', 'There is no known value to class.', { name: 'values' });
  requireFinite('values', values);
  return edgesOfRuns(values.slice().sort(), null, count);
}

/**
 * The same from different values and how many rows have each: nothing of the length of the sample is sorted.
 * @param values in any order; a value may stand there more than once
 * @param counts rows of each value; a value without rows is passed over
 * @throws NumericError for no row, NaN or an infinite value (names its place), a count outside
 * @example fineEdgesOfCounts([9.9, 1.237, 2.46, 1.81], [1, 1, 1, 1], 4) // [1.8, 2, 9]
 */
export function fineEdgesOfCounts(values: ArrayLike<number>, counts: ArrayLike<number>, count: number): number[] {
  requireSameLength('counts', counts.length, values.length);
  requireFinite('values', values);
  requireFinite('counts', counts);
  const order = Uint32Array.from(Array.from(values, (_, i) => i).filter((i) => counts[i] > 0)).sort(
    (a, b) => values[a] - values[b],
  );
  if (order.length === 0) throw new NumericError('no-rows', 'There is no known value to class.', { name: 'values' });
  return edgesOfRuns(
    Float64Array.from(order, (i) => values[i]),
    Float64Array.from(order, (i) => counts[i]),
    count,
  );
}

/** @param counts rows of each of the sorted values; one each when null */
function edgesOfRuns(sorted: Float64Array, counts: Float64Array | null, count: number): number[] {
  requireThat(
    Number.isInteger(count) && count >= 1 && count <= 250,
    'count',
    'the number of fine classes lies between 1 and 250.',
  );
  // Where each run of equal values starts, in rows and among the values; the first has nothing below it to be separated from.
  const starts: number[] = [];
  const places: number[] = [];
  let rows = 0;
  for (let i = 0; i < sorted.length; i++) {
    if (i > 0 && sorted[i] !== sorted[i - 1]) {
      starts.push(rows);
      places.push(i);
    }
    rows += counts ? counts[i] : 1;
  }
  const chosen = starts.length < count ? starts.map((_, run) => run) : quantileRuns(starts, rows, count);
  return chosen.map((run) => shortestBetween(sorted[places[run] - 1], sorted[places[run]]));
}

/** The run whose start is nearest to each quantile, each once. */
function quantileRuns(starts: readonly number[], rows: number, count: number): number[] {
  const chosen: number[] = [];
  let s = 0;
  for (let k = 1; k < count; k++) {
    const target = (rows * k) / count;
    while (s + 1 < starts.length && Math.abs(starts[s + 1] - target) <= Math.abs(starts[s] - target)) s++;
    if (chosen[chosen.length - 1] !== s) chosen.push(s);
  }
  return chosen;
}

/**
 * The shortest decimal c with below < c <= value; of equally short ones the largest.
 * @param below and value finite, below < value
 * @example shortestBetween(1.237, 1.81) // 1.8
 */
export function shortestBetween(below: number, value: number): number {
  if (below < 0 && value >= 0) return 0;
  const largest = Math.max(Math.abs(below), Math.abs(value));
  const top = Math.floor(Math.log10(largest)) + 1;
  for (let exponent = top; exponent >= top - 17; exponent--) {
    const multiple = Math.floor(
      Number(`${value}e${-exponent}`.replace(/e([+-]?\d+)e(-?\d+)/, (_, a, b) => `e${Number(a) + Number(b)}`)),
    );
    const candidate = Number(`${multiple}e${exponent}`);
    if (candidate > below && candidate <= value) return candidate;
  }
  return value;
}
