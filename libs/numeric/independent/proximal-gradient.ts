import { NumericError } from '../errors';
import type { Fit, FitProblem } from '../penalised/problem';
import { requireLambda, requireProblem } from '../penalised/validation';

/**
 * The second solver: accelerated proximal gradient with restart. It shares no code with coordinate descent (own loss, own standardising, own
 * proximal step, own residual), so that an error of one cannot hide in the other; only the check of arguments is the same. First order only: slow
 * beside it, and good for a replication.
 */

export interface IndependentOptions {
  /** Largest optimality residual, default 1e-9. */
  readonly tolerance?: number;
  readonly mostIterations?: number;
}

interface Standardised {
  readonly z: Float64Array[];
  readonly centre: Float64Array;
  readonly scale: Float64Array;
  readonly weight: Float64Array;
  readonly total: number;
}

function standardise(problem: FitProblem): Standardised {
  const rows = problem.outcome.length;
  const weight = new Float64Array(rows);
  let total = 0;
  for (let i = 0; i < rows; i++) total += problem.weights ? problem.weights[i] : 1;
  for (let i = 0; i < rows; i++) weight[i] = (problem.weights ? problem.weights[i] : 1) / total;
  const centre = new Float64Array(problem.columns.length);
  const scale = new Float64Array(problem.columns.length);
  const z = problem.columns.map((column, j) => {
    const weighted = column.filter((_, i) => weight[i] > 0);
    if (weighted.every((x) => x === weighted[0])) return new Float64Array(rows);
    let mean = 0;
    for (let i = 0; i < rows; i++) mean += weight[i] * column[i];
    // Distances are taken in units of the largest, so that their squares neither vanish nor overflow.
    const farthest = column.reduce((most, x, i) => (weight[i] > 0 ? Math.max(most, Math.abs(x - mean)) : most), 0);
    if (!(farthest > 1e-304 && farthest < 1e304))
      throw new NumericError('out-of-range', `Column ${j} has a spread of ${farthest}.`, { name: 'columns', column: j });
    let variance = 0;
    for (let i = 0; i < rows; i++) if (weight[i] > 0) variance += weight[i] * ((column[i] - mean) / farthest) ** 2;
    centre[j] = mean;
    scale[j] = farthest * Math.sqrt(variance);
    return column.map((x, i) => (weight[i] > 0 ? (x - mean) / scale[j] : 0));
  });
  return { z, centre, scale, weight, total };
}

/**
 * Columns held at 0 because an earlier one says the same and the penalty does not tell them apart: the first of them carries all. The rule is that of
 * the first solver (docs/decisions, columns that say the same), found here in another way: standardised values that agree on every row.
 */
function heldColumns({ z, scale, weight }: Standardised, { penalty }: FitProblem): boolean[] {
  const multiplier = (j: number): number => penalty.multipliers?.[j] ?? 1;
  const limit = (limits: Float64Array | undefined, j: number, none: number): number => limits?.[j] ?? none;
  const held = z.map(() => false);
  const agree = (j: number, k: number): boolean => {
    const sign = Math.sign(z[j][differing(z[j])] * z[k][differing(z[j])]);
    if (!z[j].every((value, i) => !(weight[i] > 0) || Math.abs(z[k][i] - sign * value) <= 1e-11)) return false;
    if (!penalty.standardize && Math.abs(scale[j] - scale[k]) > 1e-11 * scale[j]) return false;
    const [low, high] = [limit(penalty.lower, j, -Infinity), limit(penalty.upper, j, Infinity)];
    const mirrored =
      sign > 0
        ? [limit(penalty.lower, k, -Infinity), limit(penalty.upper, k, Infinity)]
        : [-limit(penalty.upper, k, Infinity), -limit(penalty.lower, k, -Infinity)];
    const simple = (value: number): boolean => value === 0 || Math.abs(value) === Infinity;
    return simple(low) && simple(high) && low === mirrored[0] && high === mirrored[1];
  };
  for (let k = 1; k < z.length; k++) {
    if (scale[k] === 0 || !(penalty.mixing === 1 || multiplier(k) === 0)) continue;
    for (let j = 0; j < k && !held[k]; j++) held[k] = scale[j] > 0 && !held[j] && multiplier(j) === multiplier(k) && agree(j, k);
  }
  return held;
}

/** A row where a standardised column is far from its mean. */
const differing = (values: Float64Array): number => values.findIndex((value) => Math.abs(value) > 0.5);

/** Largest eigenvalue of the weighted Gram matrix of (1, z) by power iteration; a quarter of it bounds the curvature of the logistic loss. */
function largestEigenvalue({ z, weight }: Standardised): number {
  const rows = weight.length;
  let vector = Float64Array.from({ length: z.length + 1 }, (_, j) => 1 + ((j * 37) % 11) / 11);
  let value = 1;
  for (let round = 0; round < 100; round++) {
    const image = new Float64Array(rows).fill(vector[0]);
    z.forEach((column, j) => {
      for (let i = 0; i < rows; i++) image[i] += vector[j + 1] * column[i];
    });
    const next = new Float64Array(vector.length);
    for (let i = 0; i < rows; i++) next[0] += weight[i] * image[i];
    z.forEach((column, j) => {
      for (let i = 0; i < rows; i++) next[j + 1] += weight[i] * image[i] * column[i];
    });
    const norm = Math.sqrt(next.reduce((sum, x) => sum + x * x, 0));
    const settled = Math.abs(norm - value) < 1e-6 * norm;
    value = norm;
    vector = next.map((x) => x / norm);
    if (settled) break;
  }
  // Power iteration comes from below.
  return 1.02 * value;
}

class SecondMethod {
  private readonly standardised: Standardised;
  private readonly lasso: Float64Array;
  private readonly ridge: Float64Array;
  private readonly unit: Float64Array;
  private readonly eta: Float64Array;
  private readonly held: boolean[];

  constructor(
    private readonly problem: FitProblem,
    private readonly lambda: number,
  ) {
    this.standardised = standardise(problem);
    this.held = heldColumns(this.standardised, problem);
    const { mixing, standardize, multipliers } = problem.penalty;
    const { scale } = this.standardised;
    this.unit = scale.map((s) => (standardize ? 1 : s));
    this.lasso = scale.map((_, j) => (lambda * (multipliers?.[j] ?? 1) * mixing) / (this.unit[j] || 1));
    this.ridge = scale.map(
      (_, j) => (lambda * (multipliers?.[j] ?? 1) * (1 - mixing)) / (this.unit[j] || 1) / (this.unit[j] || 1),
    );
    this.eta = new Float64Array(problem.outcome.length);
  }

  /** Mean loss at a point; fills in its gradient for (intercept, t). */
  private smooth(point: Float64Array, gradient: Float64Array): number {
    const { z, weight } = this.standardised;
    const { outcome, offset } = this.problem;
    const { eta } = this;
    const rows = eta.length;
    for (let i = 0; i < rows; i++) eta[i] = point[0] + (offset ? offset[i] : 0);
    z.forEach((column, j) => {
      const t = point[j + 1];
      if (t !== 0) for (let i = 0; i < rows; i++) eta[i] += t * column[i];
    });
    let loss = 0;
    gradient[0] = 0;
    for (let i = 0; i < rows; i++) {
      // With s = +1 for good and -1 for bad the loss is log(1 + e^-s eta).
      const sign = outcome[i] === 1 ? 1 : -1;
      const margin = sign * eta[i];
      const e = Math.exp(-Math.abs(margin));
      loss += weight[i] * ((margin < 0 ? -margin : 0) + Math.log1p(e));
      eta[i] = -sign * weight[i] * (margin > 0 ? e / (1 + e) : 1 / (1 + e));
      gradient[0] += eta[i];
    }
    z.forEach((column, j) => {
      let sum = 0;
      for (let i = 0; i < rows; i++) sum += eta[i] * column[i];
      gradient[j + 1] = sum;
    });
    return loss;
  }

  /** The penalty with its limits is handled exactly: the point nearest to `value` that pays for itself. */
  private proximal(value: number, step: number, j: number): number {
    const { scale } = this.standardised;
    const shrunk = (Math.sign(value) * Math.max(0, Math.abs(value) - step * this.lasso[j])) / (1 + step * this.ridge[j]);
    const low = (this.problem.penalty.lower?.[j] ?? -Infinity) * scale[j];
    const high = (this.problem.penalty.upper?.[j] ?? Infinity) * scale[j];
    if (scale[j] === 0 || this.held[j]) return 0;
    return shrunk < low ? low : shrunk > high ? high : shrunk;
  }

  /** Optimality residual: how far each coordinate's subdifferential is from holding 0, on the scale that is reported. */
  private residual(point: Float64Array, gradient: Float64Array): number {
    const { scale, centre } = this.standardised;
    let largest = Math.abs(gradient[0]);
    for (let j = 0; j < scale.length; j++) {
      if (scale[j] === 0 || this.held[j]) continue;
      const t = point[j + 1];
      // The definition is for uncentred columns; the centred gradient differs by the intercept's.
      const pull = t === 0 ? 0 : this.ridge[j] * t;
      const g = gradient[j + 1] + pull + (centre[j] / scale[j]) * gradient[0];
      let least = t > 0 ? g + this.lasso[j] : g - this.lasso[j];
      let most = t < 0 ? g - this.lasso[j] : g + this.lasso[j];
      if (t >= (this.problem.penalty.upper?.[j] ?? Infinity) * scale[j]) most = Infinity;
      if (t <= (this.problem.penalty.lower?.[j] ?? -Infinity) * scale[j]) least = -Infinity;
      const distance = least > 0 ? least : most < 0 ? -most : 0;
      largest = Math.max(largest, distance * this.unit[j]);
    }
    return largest;
  }

  run(tolerance: number, most: number): Fit {
    const { scale, centre, total } = this.standardised;
    const size = scale.length + 1;
    const step = 4 / largestEigenvalue(this.standardised);
    let point = new Float64Array(size);
    let ahead = point.slice();
    const gradient = new Float64Array(size);
    let momentum = 1;
    let residual = Infinity;
    let iterations = 0;
    for (; iterations < most; iterations++) {
      this.smooth(ahead, gradient);
      const next = new Float64Array(size);
      next[0] = ahead[0] - step * gradient[0];
      for (let j = 1; j < size; j++) next[j] = this.proximal(ahead[j] - step * gradient[j], step, j - 1);
      // Restart when the momentum points uphill (O'Donoghue and Candès 2015, gradient scheme).
      let uphill = 0;
      for (let j = 0; j < size; j++) uphill += (ahead[j] - next[j]) * (next[j] - point[j]);
      const following = uphill > 0 ? 1 : (1 + Math.sqrt(1 + 4 * momentum * momentum)) / 2;
      const carry = uphill > 0 ? 0 : (momentum - 1) / following;
      const forward = new Float64Array(size);
      for (let j = 0; j < size; j++) forward[j] = next[j] + carry * (next[j] - point[j]);
      point = next;
      ahead = forward;
      momentum = following;
      if (iterations % 10 !== 9) continue;
      this.smooth(point, gradient);
      residual = this.residual(point, gradient);
      if (residual <= tolerance) break;
    }
    const loss = this.smooth(point, gradient);
    residual = this.residual(point, gradient);
    const coefficients = scale.map((s, j) => (s === 0 || point[j + 1] === 0 ? 0 : point[j + 1] / s));
    let intercept = point[0];
    let objective = loss;
    coefficients.forEach((b, j) => {
      const t = point[j + 1];
      intercept -= b * centre[j];
      if (t !== 0) objective += this.lasso[j] * Math.abs(t) + (this.ridge[j] / 2) * t * t;
    });
    const status = residual <= tolerance ? 'converged' : 'iteration-limit';
    return {
      lambda: this.lambda,
      intercept,
      coefficients,
      objective,
      deviance: 2 * total * loss,
      optimalityResidual: residual,
      iterations,
      status,
    };
  }
}

/**
 * Fits by accelerated proximal gradient with restart: the validator's second method. Its coefficients agree with those of coordinate descent to
 * about 1e-6 where the optimum is unique. Arguments as for `fitAt`.
 * @param problem and lambda as for `fitAt`
 * @param options `tolerance` of the residual (default 1e-9) and `mostIterations` (default 50,000)
 * @throws NumericError as `fitAt`
 * @returns status "iteration-limit" when the residual is still above the tolerance; separation is not told apart here
 * @example fitIndependently({ columns, outcome, penalty: { mixing: 1, standardize: true } }, 0.01).coefficients
 * Source: A. Beck and M. Teboulle, SIAM J. Imaging Sciences 2(1), 2009; B. O'Donoghue and E. Candès, Foundations of Computational Mathematics 15, 2015.
 */
export function fitIndependently(problem: FitProblem, lambda: number, options: IndependentOptions = {}): Fit {
  requireProblem(problem);
  requireLambda(lambda);
  return new SecondMethod(problem, lambda).run(options.tolerance ?? 1e-9, options.mostIterations ?? 50_000);
}
