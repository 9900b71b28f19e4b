import { requireFinite, requireSameLength, requireThat } from '../checks';

/** A column kept as one byte a row and a value for each code: WOE by bin. */
export interface ValuedCodes {
  /** Code of each row; rows that `use` leaves out may hold anything. */
  readonly codes: Uint8Array;
  /** Value of each code. A code beyond its end counts as 0 (an unseen category is neutral). */
  readonly values: ArrayLike<number>;
}

/** Rows decoded at a time: two columns of a block stay in the first cache. */
const BLOCK = 2048;

/**
 * Correlation matrix (Pearson, weighted if weights are given) of coded columns over the rows in use, p x p, row by row. A column without variance
 * has NaN with every column. The products of two columns are summed in blocks around the exact means, so no digits are lost to large means.
 *
 * @param use 1 for each row that counts
 * @throws NumericError for columns of different lengths, or without a row in use
 * @example codedCorrelation([{ codes: Uint8Array.of(0, 1, 1), values: [-1, 1] }], Uint8Array.of(1, 1, 1))[0] // 1
 */
export function codedCorrelation(
  columns: readonly ValuedCodes[],
  use: Uint8Array,
  weights?: ArrayLike<number> | null,
): Float64Array {
  const count = columns.length;
  columns.forEach(({ codes, values }, j) => {
    requireSameLength(`column ${j}`, codes.length, use.length);
    requireFinite(`values of column ${j}`, values);
  });
  if (weights) requireFinite('weights', weights);
  const rows: number[] | Uint32Array = rowsInUse(use);
  requireThat(rows.length > 0, 'use', 'no row is in use.');
  let total = 0;
  const share = new Float64Array(rows.length);
  for (let i = 0; i < rows.length; i++) total += share[i] = weights ? weights[rows[i]] : 1;
  requireThat(total > 0, 'weights', 'the weights add up to zero.');
  const roots = share.map((weight) => Math.sqrt(weight / total));
  const tables = columns.map(({ codes, values }) => centredTable(codes, values, rows, share, total));
  const product = new Float64Array(count * count);
  const block = Array.from({ length: count }, () => new Float64Array(BLOCK));
  for (let from = 0; from < rows.length; from += BLOCK) {
    const size = Math.min(BLOCK, rows.length - from);
    columns.forEach(({ codes }, j) => {
      const [into, table] = [block[j], tables[j]];
      for (let i = 0; i < size; i++) into[i] = table[codes[rows[from + i]]] * roots[from + i];
    });
    addProducts(block, size, product);
  }
  const matrix = new Float64Array(count * count);
  for (let j = 0; j < count; j++) {
    for (let k = 0; k <= j; k++) {
      const scale = Math.sqrt(product[j * count + j] * product[k * count + k]);
      const value = scale > 0 ? (j === k ? 1 : Math.max(-1, Math.min(1, product[j * count + k] / scale))) : NaN;
      matrix[j * count + k] = value;
      matrix[k * count + j] = value;
    }
  }
  return matrix;
}

function rowsInUse(use: Uint8Array): Uint32Array {
  let found = 0;
  for (const one of use) found += one;
  const rows = new Uint32Array(found);
  let next = 0;
  for (let row = 0; row < use.length; row++) if (use[row] === 1) rows[next++] = row;
  return rows;
}

/** Values less their weighted mean, for each of the 256 codes a byte can hold. */
function centredTable(
  codes: Uint8Array,
  values: ArrayLike<number>,
  rows: Uint32Array,
  share: Float64Array,
  total: number,
): Float64Array {
  const weight = new Float64Array(256);
  for (let i = 0; i < rows.length; i++) weight[codes[rows[i]]] += share[i];
  let mean = 0;
  for (let code = 0; code < values.length; code++) mean += (weight[code] / total) * values[code];
  const filled = weight.reduce((sum, one) => sum + (one > 0 ? 1 : 0), 0);
  // One code only: no variance, and rounding must not invent any.
  return Float64Array.from({ length: 256 }, (_, code) => (filled < 2 ? 0 : (code < values.length ? values[code] : 0) - mean));
}

/** Adds the products of all pairs of columns of one block, lower triangle, two by two: each number that is loaded is used twice. */
function addProducts(block: readonly Float64Array[], size: number, product: Float64Array): void {
  const count = block.length;
  for (let j = 0; j < count; j += 2) {
    const [a, b] = [block[j], block[Math.min(j + 1, count - 1)]];
    for (let k = 0; k <= j; k += 2) {
      const [c, d] = [block[k], block[Math.min(k + 1, count - 1)]];
      let ac = 0;
      let ad = 0;
      let bc = 0;
      let bd = 0;
      for (let i = 0; i < size; i++) {
        const [u, v, x, y] = [a[i], b[i], c[i], d[i]];
        ac += u * x;
        ad += u * y;
        bc += v * x;
        bd += v * y;
      }
      product[j * count + k] += ac;
      if (k + 1 < count) product[j * count + k + 1] += ad;
      if (j + 1 < count) product[(j + 1) * count + k] += bc;
      if (j + 1 < count && k + 1 < count) product[(j + 1) * count + k + 1] += bd;
    }
  }
}
