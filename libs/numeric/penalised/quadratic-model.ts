import { factorise, solveFactorised } from './cholesky';
import { softThreshold, violation } from './penalty';

/**
 * The penalised quadratic model of one outer iteration, over m coordinates: minimise
 * gradient (t - t0) + (t - t0)' H (t - t0)/2 + sum l1 |t| + l2 t^2/2 within limits.
 */
export interface QuadraticModel {
  /** m x m, symmetric, the intercept eliminated. */
  readonly hessian: Float64Array;
  readonly l1: Float64Array;
  readonly l2: Float64Array;
  readonly lower: Float64Array;
  readonly upper: Float64Array;
}

/** Sweeps before the Newton step on the free coordinates; they find which coordinates are free. */
const SWEEPS = 4;
const MOST_ROUNDS = 500;

/**
 * Cyclic coordinate descent with covariance updates: soft-threshold one coordinate, move the gradient of all by one column of H. After a few
 * sweeps the set of free coordinates has settled and one Cholesky solve on it lands on the optimum; the step stops at the first coordinate that
 * would change sign or pass a limit. Coordinates enter only by coordinate descent.
 * @param t start and result
 * @param gradient smooth gradient at t, kept up to date
 * @param tolerance largest violation left in any coordinate
 * Source: J. Friedman, T. Hastie and R. Tibshirani, J. Statistical Software 33(1), 2010, sections 2.1 and 2.2.
 */
export function minimiseModel(model: QuadraticModel, t: Float64Array, gradient: Float64Array, tolerance: Float64Array): void {
  const size = t.length;
  const all = Array.from({ length: size }, (_, j) => j);
  for (let round = 0; round < MOST_ROUNDS; round++) {
    sweep(model, t, gradient, all);
    const active = all.filter((j) => t[j] !== 0);
    for (let pass = 1; pass < SWEEPS; pass++) sweep(model, t, gradient, active);
    newtonOnFree(model, t, gradient);
    if (worst(model, t, gradient, tolerance) <= 1) return;
  }
}

/** Largest violation in units of its tolerance. */
function worst(model: QuadraticModel, t: Float64Array, gradient: Float64Array, tolerance: Float64Array): number {
  let largest = 0;
  for (let j = 0; j < t.length; j++) {
    const amount = violation(t[j], gradient[j], model.l1[j], model.l2[j], model.lower[j], model.upper[j]) / tolerance[j];
    if (amount > largest) largest = amount;
  }
  return largest;
}

function move(model: QuadraticModel, t: Float64Array, gradient: Float64Array, j: number, target: number): void {
  const size = t.length;
  const step = target - t[j];
  t[j] = target;
  const row = j * size;
  for (let k = 0; k < size; k++) gradient[k] += step * model.hessian[row + k];
}

function sweep(model: QuadraticModel, t: Float64Array, gradient: Float64Array, list: readonly number[]): void {
  const size = t.length;
  for (const j of list) {
    const curvature = model.hessian[j * size + j];
    const denominator = curvature + model.l2[j];
    if (!(denominator > 0)) continue;
    const free = softThreshold(curvature * t[j] - gradient[j], model.l1[j]) / denominator;
    const target = Math.min(model.upper[j], Math.max(model.lower[j], free));
    if (target !== t[j]) move(model, t, gradient, j, target);
  }
}

function newtonOnFree(model: QuadraticModel, t: Float64Array, gradient: Float64Array): void {
  const { hessian, l1, l2, lower, upper } = model;
  const size = t.length;
  const free: number[] = [];
  for (let j = 0; j < size; j++) {
    const interior = t[j] > lower[j] && t[j] < upper[j];
    if (interior && (t[j] !== 0 || l1[j] === 0) && l2[j] < Infinity) free.push(j);
  }
  const count = free.length;
  if (count === 0) return;
  const factor = new Float64Array(count * count);
  // A singular set (collinear columns) is solved with a faint ridge: the rounds repeat until the violation is gone, so only speed is at stake.
  for (let ridge = 0; ; ridge = ridge === 0 ? 1e-9 : ridge * 100) {
    if (ridge > 1e-3) return;
    for (let a = 0; a < count; a++) {
      for (let b = 0; b <= a; b++) factor[a * count + b] = hessian[free[a] * size + free[b]];
      factor[a * count + a] = factor[a * count + a] * (1 + ridge) + l2[free[a]];
    }
    if (factorise(factor, count)) break;
  }
  const step = new Float64Array(count);
  free.forEach((j, a) => {
    step[a] = -(gradient[j] + Math.sign(t[j]) * l1[j] + l2[j] * t[j]);
  });
  solveFactorised(factor, count, step);
  let length = 1;
  let stopper = -1;
  let stop = 0;
  free.forEach((j, a) => {
    const target = t[j] + step[a];
    const floor = t[j] > 0 && l1[j] > 0 ? Math.max(0, lower[j]) : lower[j];
    const ceiling = t[j] < 0 && l1[j] > 0 ? Math.min(0, upper[j]) : upper[j];
    const bound = target < floor ? floor : target > ceiling ? ceiling : target;
    if (bound === target) return;
    const reach = (bound - t[j]) / step[a];
    if (reach < length) {
      length = reach;
      stopper = j;
      stop = bound;
    }
  });
  free.forEach((j, a) => move(model, t, gradient, j, j === stopper ? stop : t[j] + length * step[a]));
}
