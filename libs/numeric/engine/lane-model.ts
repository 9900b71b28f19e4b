import { factoriseRows, solveFactorised } from '../penalised/cholesky';
import { softThreshold, violation } from '../penalised/penalty';
import type { Curvature } from './curvature';
import type { Point } from './lane';
import type { Standardisation } from './standardisation';

const MOST_ROUNDS = 200;
const MOST_SWEEPS = 4;

/**
 * Minimises a lane's quadratic model plus penalty: Newton steps on the free coordinates, each up to the first that would change sign or pass a limit;
 * coordinates enter by coordinate descent alone. While the curvature stays the same the factor of the free set is kept from solve to solve: a coordinate that
 * enters adds a row to it, one that leaves has the rows after its own made anew.
 */
export class LaneModel {
  private readonly free: Int32Array;
  private readonly step: Float64Array;
  private readonly rest: Float64Array;
  private readonly trial: Float64Array;
  private factor: Float64Array;
  /** Coordinates in the order of the factor's rows. */
  private readonly keptSet: Int32Array;
  private readonly isFree: Uint8Array;
  private kept = 0;
  private keptCurvature: Curvature | null = null;
  private keptLambda = NaN;
  private keptRidge = 0;

  constructor(private readonly size: number) {
    this.free = new Int32Array(size);
    this.keptSet = new Int32Array(size);
    this.step = new Float64Array(size);
    this.rest = new Float64Array(size);
    this.trial = new Float64Array(size);
    this.isFree = new Uint8Array(size);
    this.factor = new Float64Array(0);
  }

  /**
   * @param from point with its gradient, which the model is taken at
   * @param to gets intercept and coordinates of the model's minimum; may be `from`
   * @param tolerance largest violation left, as it is reported
   * @param gradientShift added to the gradient (the intercept's part first), or null
   */
  solve(
    curvature: Curvature,
    s: Standardisation,
    lambda: number,
    from: Point,
    to: Point,
    tolerance: number,
    gradientShift: Float64Array | null = null,
  ): void {
    const { size, rest } = this;
    const { gram, hessian } = curvature;
    const width = size + 1;
    const g0 = from.gradientOfIntercept + (gradientShift ? gradientShift[0] : 0);
    for (let j = 0; j < size; j++) {
      rest[j] = from.gradient[j] + (gradientShift ? gradientShift[j + 1] : 0) - (gram[(j + 1) * width] / gram[0]) * g0;
    }
    const t = this.trial;
    t.set(from.t);
    for (let round = 0; round < MOST_ROUNDS; round++) {
      while (this.newton(curvature, s, lambda, t)) {
        // A coordinate left the free set on the way; the others go on without it.
      }
      if (this.sweep(hessian, s, lambda, t, tolerance) <= tolerance) break;
      for (let k = 1; k < MOST_SWEEPS; k++) if (this.sweep(hessian, s, lambda, t, tolerance) <= tolerance) break;
    }
    let change = -g0;
    for (let j = 0; j < size; j++) if (s.used[j]) change -= gram[j + 1] * (t[j] - from.t[j]);
    to.intercept = from.intercept + change / gram[0];
    to.t.set(t);
  }

  private move(hessian: Float64Array, t: Float64Array, j: number, target: number): void {
    const { size, rest } = this;
    const step = target - t[j];
    t[j] = target;
    const row = j * size;
    for (let k = 0; k < size; k++) rest[k] += step * hessian[row + k];
  }

  /** Takes the rest along the steps of the free coordinates, four rows of the matrix at a time. */
  private takeAlong(hessian: Float64Array, count: number): void {
    const { size, rest, free, step } = this;
    let a = 0;
    for (; a + 3 < count; a += 4) {
      const [s0, s1, s2, s3] = [step[a], step[a + 1], step[a + 2], step[a + 3]];
      const [r0, r1, r2, r3] = [free[a] * size, free[a + 1] * size, free[a + 2] * size, free[a + 3] * size];
      for (let k = 0; k < size; k++)
        rest[k] += s0 * hessian[r0 + k] + s1 * hessian[r1 + k] + (s2 * hessian[r2 + k] + s3 * hessian[r3 + k]);
    }
    for (; a < count; a++) {
      const row = free[a] * size;
      for (let k = 0; k < size; k++) rest[k] += step[a] * hessian[row + k];
    }
  }

  /** One sweep of coordinate descent; returns the largest violation met. */
  private sweep(hessian: Float64Array, s: Standardisation, lambda: number, t: Float64Array, tolerance: number): number {
    const { size, rest } = this;
    let worst = 0;
    for (let j = 0; j < size; j++) {
      if (s.used[j] === 0) continue;
      const l1 = lambda * s.absolute[j];
      const l2 = lambda * s.square[j];
      const amount = violation(t[j], rest[j], l1, l2, s.lower[j], s.upper[j]) * s.reporting[j];
      if (amount > worst) worst = amount;
      if (amount <= 0.1 * tolerance) continue;
      const curvature = hessian[j * size + j];
      if (!(curvature + l2 > 0)) continue;
      const target = softThreshold(curvature * t[j] - rest[j], l1) / (curvature + l2);
      const held = Math.min(s.upper[j], Math.max(s.lower[j], target));
      if (held !== t[j]) this.move(hessian, t, j, held);
    }
    return worst;
  }

  /** A Newton step on the free coordinates; true if it was stopped by one of them. */
  private newton(curvature: Curvature, s: Standardisation, lambda: number, t: Float64Array): boolean {
    const { size, rest, free, step } = this;
    const { hessian } = curvature;
    let count = 0;
    for (let j = 0; j < size; j++) {
      if (s.used[j] === 0 || !(t[j] > s.lower[j] && t[j] < s.upper[j])) continue;
      if (t[j] !== 0 || s.absolute[j] * lambda === 0) free[count++] = j;
    }
    if (count === 0 || !this.factorised(curvature, s, lambda, count)) return false;
    for (let a = 0; a < count; a++) {
      const j = free[a];
      step[a] = -(rest[j] + lambda * (Math.sign(t[j]) * s.absolute[j] + s.square[j] * t[j]));
    }
    solveFactorised(this.factor, count, step, size);
    let length = 1;
    let stopper = -1;
    let stop = 0;
    for (let a = 0; a < count; a++) {
      const j = free[a];
      const target = t[j] + step[a];
      const signed = s.absolute[j] * lambda > 0;
      const floor = t[j] > 0 && signed ? Math.max(0, s.lower[j]) : s.lower[j];
      const ceiling = t[j] < 0 && signed ? Math.min(0, s.upper[j]) : s.upper[j];
      const bound = target < floor ? floor : target > ceiling ? ceiling : target;
      if (bound === target) continue;
      const reach = (bound - t[j]) / step[a];
      if (reach < length) {
        length = reach;
        stopper = j;
        stop = bound;
      }
    }
    for (let a = 0; a < count; a++) {
      const j = free[a];
      const target = j === stopper ? stop : t[j] + length * step[a];
      step[a] = target - t[j];
      t[j] = target;
    }
    this.takeAlong(hessian, count);
    return stopper >= 0;
  }

  /** Leaves the free coordinates in the order of the factor's rows. */
  private factorised(curvature: Curvature, s: Standardisation, lambda: number, count: number): boolean {
    const { size, free, keptSet, isFree } = this;
    let ridge = false;
    for (let a = 0; a < count && !ridge; a++) ridge = s.square[free[a]] > 0;
    let from = 0;
    if (this.keptCurvature === curvature && (!ridge || this.keptLambda === lambda)) {
      for (let a = 0; a < count; a++) isFree[free[a]] = 1;
      let place = 0;
      for (let k = 0; k < this.kept; k++) {
        const j = keptSet[k];
        if (isFree[j] === 0) continue;
        // Up to the first that left, the rows stand.
        if (k === place) from = k + 1;
        keptSet[place++] = j;
        isFree[j] = 0;
      }
      for (let a = 0; a < count; a++) {
        const j = free[a];
        if (isFree[j] === 0) continue;
        keptSet[place++] = j;
        isFree[j] = 0;
      }
      if (from === count && this.kept === count) {
        free.set(keptSet.subarray(0, count));
        return true;
      }
      // A ridge that a singular set needed is tried without again.
      if (this.keptRidge > 0) from = 0;
    } else keptSet.set(free.subarray(0, count));
    free.set(keptSet.subarray(0, count));
    if (this.factor.length === 0) this.factor = new Float64Array(size * size);
    const { factor } = this;
    // A set that is singular in spite of the faint ridge is solved with a stronger one: rounds repeat until the violation is gone.
    for (let more = 0; ; more = more === 0 ? 1e-6 : more * 100) {
      if (more > 1e-2) {
        this.keptCurvature = null;
        return false;
      }
      if (more > 0) from = 0;
      for (let a = from; a < count; a++) {
        const row = free[a] * size;
        for (let b = 0; b <= a; b++) factor[a * size + b] = curvature.hessian[row + free[b]];
        factor[a * size + a] = factor[a * size + a] * (1 + more) + lambda * s.square[free[a]];
      }
      if (factoriseRows(factor, size, from, count)) {
        this.keptRidge = more;
        break;
      }
    }
    this.keptCurvature = curvature;
    this.keptLambda = lambda;
    this.kept = count;
    return true;
  }
}
