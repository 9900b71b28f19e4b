import type { CodedProblem } from './coded-columns';
import { exp64, log64 } from './kernels/plain-functions';
import { rowsOfFoldIn, type Layout } from './layout';
import type { Standardisation } from './standardisation';

/** The rows of one fold side by side, for what passes do not tell where they leave rows out by counts. */
export class LeftOutRows {
  private readonly rows: Uint32Array;
  /** Codes by internal column, row after row; null for linear columns. */
  private readonly codes: readonly (Uint8Array | null)[];
  private readonly eta: Float64Array;
  private readonly table = new Float64Array(256);

  /** @param fold from 0 */
  constructor(
    private readonly problem: CodedProblem,
    private readonly layout: Layout,
    fold: number,
  ) {
    const { order, columns } = layout;
    const { start, end } = rowsOfFoldIn(layout, fold);
    const rows = order.subarray(start, end);
    this.rows = rows;
    this.eta = new Float64Array(rows.length);
    this.codes = columns.map(({ source }) => {
      const column = problem.columns[source];
      if (column.kind === 'linear') return null;
      const own = new Uint8Array(rows.length);
      for (let k = 0; k < own.length; k++) own[k] = column.codes[rows[k]];
      return own;
    });
  }

  /**
   * Mean loss over the rows, in doubles.
   * @param point intercept and coordinates on the standardised scale
   * @param s of the lane that leaves the rows out
   */
  meanLoss(point: { readonly intercept: number; readonly t: Float64Array }, s: Standardisation): number {
    const { problem, layout, rows, codes, eta, table } = this;
    const { outcome, weights, offset } = problem;
    eta.fill(point.intercept);
    if (offset) for (let k = 0; k < rows.length; k++) eta[k] += offset[rows[k]];
    for (let j = 0; j < codes.length; j++) {
      const t = point.t[j];
      if (t === 0) continue;
      const { source, firstBin, bins } = layout.columns[j];
      const own = codes[j];
      if (own) {
        for (let code = 0; code < bins; code++) table[code] = t * s.values[firstBin + code];
        for (let k = 0; k < own.length; k++) eta[k] += table[own[k]];
      } else {
        const { values } = problem.columns[source];
        const slope = t / s.scale[j];
        for (let k = 0; k < rows.length; k++) eta[k] += slope * (values[rows[k]] - s.centre[j]);
      }
    }
    let sum = 0;
    let total = 0;
    for (let k = 0; k < rows.length; k++) {
      const i = rows[k];
      const w = weights ? weights[i] : 1;
      const margin = outcome[i] === 1 ? eta[k] : -eta[k];
      const size = Math.min(690, Math.abs(margin));
      sum += w * (log64(exp64(-size)) + (margin >= 0 ? 0 : size));
      total += w;
    }
    return sum / total;
  }
}
