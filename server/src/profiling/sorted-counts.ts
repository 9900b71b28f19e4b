import type { OutcomeCodes } from './leakage';

/** Whole numbers of a column's rows, counted: how often each is there, and how often with a good and with a bad outcome. */
export interface SortedCounts {
  readonly length: number;
  /** Ascending, each once. */
  readonly wholes: Int32Array;
  readonly counts: Float64Array;
  readonly goods: Float64Array;
  readonly bads: Float64Array;
}

/** Numbers that lie closer together than this are counted in place; others are sorted first. */
const countedRange = 1 << 20;

/**
 * @param wholes one per row; @param outcome per row 1 good, 0 bad, or null where it is not known
 * Sorting is by radix (Knuth, The Art of Computer Programming 3, 5.2.5), 11 bits at a time.
 */
export function sortCounts(wholes: Int32Array, outcome: OutcomeCodes | null): SortedCounts {
  if (wholes.length === 0) return empty(0);
  let smallest = wholes[0];
  let largest = wholes[0];
  for (let row = 1; row < wholes.length; row++) {
    const whole = wholes[row];
    if (whole < smallest) smallest = whole;
    else if (whole > largest) largest = whole;
  }
  return largest - smallest < countedRange
    ? countInPlace(wholes, outcome, smallest, largest - smallest + 1)
    : countSorted(wholes, outcome, smallest, largest - smallest);
}

function empty(length: number): SortedCounts & { wholes: Int32Array } {
  return {
    length,
    wholes: new Int32Array(length),
    counts: new Float64Array(length),
    goods: new Float64Array(length),
    bads: new Float64Array(length),
  };
}

function countInPlace(wholes: Int32Array, outcome: OutcomeCodes | null, smallest: number, range: number): SortedCounts {
  const counts = new Uint32Array(range);
  for (let row = 0; row < wholes.length; row++) counts[wholes[row] - smallest]++;
  const goods = new Uint32Array(outcome ? range : 0);
  const bads = new Uint32Array(outcome ? range : 0);
  if (outcome)
    for (let row = 0; row < wholes.length; row++) {
      const known = outcome[row];
      if (known === 1) goods[wholes[row] - smallest]++;
      else if (known === 0) bads[wholes[row] - smallest]++;
    }
  let length = 0;
  for (let at = 0; at < range; at++) if (counts[at] > 0) length++;
  const result = empty(length);
  for (let at = 0, place = 0; at < range; at++) {
    if (counts[at] === 0) continue;
    result.wholes[place] = smallest + at;
    result.counts[place] = counts[at];
    if (outcome) {
      result.goods[place] = goods[at];
      result.bads[place] = bads[at];
    }
    place++;
  }
  return result;
}

/** Numbers closer together than this leave room in 32 bits for what is known of the outcome. */
const packedRange = 2 ** 30;

function countSorted(wholes: Int32Array, outcome: OutcomeCodes | null, smallest: number, range: number): SortedCounts {
  // The outcome goes along in the low bits, which are not sorted by: 1 good, 0 bad, 2 neither.
  const known = outcome !== null && range < packedRange;
  if (outcome !== null && !known) return countFarApart(wholes, outcome);
  const bits = known ? 2 : 0;
  const rows = wholes.length;
  let keys = new Uint32Array(rows);
  if (known) for (let row = 0; row < rows; row++) keys[row] = ((wholes[row] - smallest) << 2) | Math.min(2, outcome[row]);
  else for (let row = 0; row < rows; row++) keys[row] = wholes[row] - smallest;
  let others = new Uint32Array(rows);
  const starts = new Uint32Array(2048);
  for (let shift = bits; shift < 32 && range >= 2 ** (shift - bits); shift += 11) {
    starts.fill(0);
    for (let row = 0; row < rows; row++) starts[(keys[row] >>> shift) & 2047]++;
    for (let digit = 0, sum = 0; digit < 2048; digit++) {
      const count = starts[digit];
      starts[digit] = sum;
      sum += count;
    }
    for (let row = 0; row < rows; row++) {
      const key = keys[row];
      others[starts[(key >>> shift) & 2047]++] = key;
    }
    [keys, others] = [others, keys];
  }
  let length = 1;
  for (let row = 1; row < rows; row++) if (keys[row] >>> bits !== keys[row - 1] >>> bits) length++;
  const result = empty(length);
  for (let row = 0, place = -1, last = -1; row < rows; row++) {
    const whole = keys[row] >>> bits;
    if (whole !== last) result.wholes[++place] = whole + smallest;
    last = whole;
    result.counts[place]++;
    if (!known) continue;
    const code = keys[row] & 3;
    if (code === 1) result.goods[place]++;
    else if (code === 0) result.bads[place]++;
  }
  return result;
}

/** Numbers from one end of what can be kept to the other: each half alone, the outcome with it. */
function countFarApart(wholes: Int32Array, outcome: OutcomeCodes): SortedCounts {
  const halves = [(whole: number): boolean => whole < 0, (whole: number): boolean => whole >= 0].map((belongs) => {
    const rows = Uint32Array.from(wholes.keys()).filter((row) => belongs(wholes[row]));
    return sortCounts(Int32Array.from(rows, (row) => wholes[row]), Uint8Array.from(rows, (row) => outcome[row]));
  }); // prettier-ignore
  const joined = empty(halves[0].length + halves[1].length);
  let at = 0;
  for (const half of halves) {
    joined.wholes.set(half.wholes, at);
    joined.counts.set(half.counts, at);
    joined.goods.set(half.goods, at);
    joined.bads.set(half.bads, at);
    at += half.length;
  }
  return joined;
}
