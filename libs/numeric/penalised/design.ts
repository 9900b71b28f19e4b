import { NumericError } from '../errors';
import type { FitProblem } from './problem';

/** Rows taken together, so that a slice of eta or of the residual stays in the processor's nearest cache. */
const BLOCK = 2048;
const GRAM_BLOCK = 256;

/**
 * How far the values of a column may lie apart: outside, a coefficient or its gradient would leave the range of a double, and the column would be
 * dropped or the fit be wrong without a word.
 */
const NARROWEST = 1e-304;
const WIDEST = 1e304;

/**
 * The columns as the solver sees them: centred by the weighted mean and divided by the weighted population standard deviation (divisor W) of the
 * rows with weight. Nothing is copied; centre and scale enter by algebra. A column without variance on those rows has scale 0 and is not used.
 * @throws NumericError for weights whose total no double holds, and for a column whose values lie closer together than 1e-304 or farther apart
 * than 1e304 (names the column)
 */
export class Design {
  readonly rows: number;
  readonly centre: Float64Array;
  readonly scale: Float64Array;
  /** Numbers of the columns with variance. */
  used: Uint32Array;
  /** Weights divided by their sum. */
  readonly share: Float64Array;
  totalWeight = 0;

  constructor(
    readonly columns: FitProblem['columns'],
    rows: number,
    weights?: ArrayLike<number>,
  ) {
    this.rows = rows;
    this.centre = new Float64Array(columns.length);
    this.scale = new Float64Array(columns.length);
    this.share = new Float64Array(rows);
    this.used = new Uint32Array(0);
    this.weigh(weights);
  }

  /** Takes weights (absent = 1 each) and recomputes centre and scale with them. */
  weigh(weights?: ArrayLike<number>): void {
    const { rows, share } = this;
    let total = 0;
    if (weights) for (let i = 0; i < rows; i++) total += weights[i];
    else total = rows;
    if (!(total > 0 && total < Infinity))
      throw new NumericError('out-of-range', `The weights add up to ${total}.`, { name: 'weights' });
    this.totalWeight = total;
    for (let i = 0; i < rows; i++) share[i] = (weights ? weights[i] : 1) / total;
    const used: number[] = [];
    this.columns.forEach((column, j) => {
      let first = NaN;
      let reach = 0;
      let mean = 0;
      for (let i = 0; i < rows; i++) {
        const s = share[i];
        if (s === 0) continue;
        const x = column[i];
        if (first !== first) first = x;
        const distance = x - first;
        if (distance > reach) reach = distance;
        else if (-distance > reach) reach = -distance;
        mean += s * distance;
      }
      this.centre[j] = mean + first;
      this.scale[j] = reach === 0 ? 0 : this.deviation(column, j, reach);
      if (this.scale[j] > 0) used.push(j);
    });
    this.used = Uint32Array.from(used);
  }

  /** Square root of the weighted variance; squares are taken of distances near 1, so that none is lost or infinite. */
  private deviation(column: Float64Array, j: number, reach: number): number {
    if (!(reach >= NARROWEST && reach <= WIDEST)) {
      throw new NumericError(
        'out-of-range',
        `The values of column ${j} lie ${reach} apart; what can be fitted lies between ${NARROWEST} and ${WIDEST} apart.`,
        { name: 'columns', column: j },
      );
    }
    // A power of two changes no digit of the result.
    const unit = 2 ** Math.floor(Math.log2(reach));
    const centre = this.centre[j];
    let variance = 0;
    for (let i = 0; i < this.rows; i++) {
      if (this.share[i] === 0) continue;
      const distance = (column[i] - centre) / unit;
      variance += this.share[i] * distance * distance;
    }
    return Math.sqrt(variance) * unit;
  }

  /** eta = intercept + sum over the nonzero coefficients + offset, written into `eta`. Coefficients are on the scale of x. */
  linearPredictor(intercept: number, coefficients: Float64Array, offset: Float64Array | undefined, eta: Float64Array): void {
    addColumns(this.columns, intercept, coefficients, offset, eta);
  }

  /**
   * Gradient of the mean loss for the scaled, uncentred coefficients of the listed columns: sum_i residual_i x_ij / s_j.
   */
  gradient(residual: Float64Array, list: ArrayLike<number>, gradient: Float64Array): void {
    const { columns, rows, scale } = this;
    for (let l = 0; l < list.length; l++) gradient[list[l]] = 0;
    for (let start = 0; start < rows; start += BLOCK) {
      const end = Math.min(rows, start + BLOCK);
      let l = 0;
      for (; l + 3 < list.length; l += 4) {
        const a = columns[list[l]];
        const b = columns[list[l + 1]];
        const c = columns[list[l + 2]];
        const d = columns[list[l + 3]];
        let sa = 0;
        let sb = 0;
        let sc = 0;
        let sd = 0;
        for (let i = start; i < end; i++) {
          const r = residual[i];
          sa += r * a[i];
          sb += r * b[i];
          sc += r * c[i];
          sd += r * d[i];
        }
        gradient[list[l]] += sa;
        gradient[list[l + 1]] += sb;
        gradient[list[l + 2]] += sc;
        gradient[list[l + 3]] += sd;
      }
      for (; l < list.length; l++) {
        const a = columns[list[l]];
        let sum = 0;
        for (let i = start; i < end; i++) sum += residual[i] * a[i];
        gradient[list[l]] += sum;
      }
    }
    for (let l = 0; l < list.length; l++) gradient[list[l]] /= scale[list[l]];
  }

  /**
   * Weighted Gram matrix of (1, centred and scaled columns of the list), (m + 1) x (m + 1), row-major and symmetric.
   * @param root square roots of the rows' curvatures
   */
  gram(root: Float64Array, list: ArrayLike<number>): Float64Array {
    const { columns, rows, centre, scale } = this;
    const size = list.length + 1;
    // An even number of slices lets the inner loop take two by two.
    const even = size + (size & 1);
    const gram = new Float64Array(even * even);
    const slices = Array.from({ length: even }, () => new Float64Array(GRAM_BLOCK));
    for (let start = 0; start < rows; start += GRAM_BLOCK) {
      const count = Math.min(GRAM_BLOCK, rows - start);
      slices[0].set(root.subarray(start, start + count));
      for (let l = 0; l < list.length; l++) {
        const column = columns[list[l]];
        const shift = centre[list[l]];
        const factor = 1 / scale[list[l]];
        const slice = slices[l + 1];
        for (let i = 0; i < count; i++) slice[i] = (column[start + i] - shift) * factor * root[start + i];
      }
      for (let a = 0; a < even; a += 2) for (let b = a; b < even; b += 2) addProducts(gram, even, slices, a, b, count);
    }
    const symmetric = new Float64Array(size * size);
    for (let a = 0; a < size; a++) {
      for (let b = a; b < size; b++) {
        symmetric[a * size + b] = gram[a * even + b];
        symmetric[b * size + a] = gram[a * even + b];
      }
    }
    return symmetric;
  }
}

/** Adds the four products of slices (a, a+1) with (b, b+1) to the Gram matrix. */
function addProducts(
  gram: Float64Array,
  size: number,
  slices: readonly Float64Array[],
  a: number,
  b: number,
  count: number,
): void {
  const a0 = slices[a];
  const a1 = slices[a + 1];
  const b0 = slices[b];
  const b1 = slices[b + 1];
  let s00 = 0;
  let s01 = 0;
  let s10 = 0;
  let s11 = 0;
  for (let i = 0; i < count; i++) {
    const p = a0[i];
    const q = a1[i];
    const u = b0[i];
    const v = b1[i];
    s00 += p * u;
    s01 += p * v;
    s10 += q * u;
    s11 += q * v;
  }
  gram[a * size + b] += s00;
  gram[a * size + b + 1] += s01;
  gram[(a + 1) * size + b] += s10;
  gram[(a + 1) * size + b + 1] += s11;
}

/** eta = intercept + sum_j coefficient_j column_j + offset; zero coefficients cost nothing. */
export function addColumns(
  columns: FitProblem['columns'],
  intercept: number,
  coefficients: ArrayLike<number>,
  offset: Float64Array | undefined,
  eta: Float64Array,
): void {
  const list: number[] = [];
  for (let j = 0; j < columns.length; j++) if (coefficients[j] !== 0) list.push(j);
  for (let start = 0; start < eta.length; start += BLOCK) {
    const end = Math.min(eta.length, start + BLOCK);
    for (let i = start; i < end; i++) eta[i] = offset ? intercept + offset[i] : intercept;
    let l = 0;
    for (; l + 3 < list.length; l += 4) {
      const a = columns[list[l]];
      const b = columns[list[l + 1]];
      const c = columns[list[l + 2]];
      const d = columns[list[l + 3]];
      const ca = coefficients[list[l]];
      const cb = coefficients[list[l + 1]];
      const cc = coefficients[list[l + 2]];
      const cd = coefficients[list[l + 3]];
      for (let i = start; i < end; i++) eta[i] += ca * a[i] + cb * b[i] + (cc * c[i] + cd * d[i]);
    }
    for (; l < list.length; l++) {
      const a = columns[list[l]];
      const ca = coefficients[list[l]];
      for (let i = start; i < end; i++) eta[i] += ca * a[i];
    }
  }
}
