import { requireThat } from '../checks';
import { withDuplicatesHeld } from './duplicates';
import { rowLoss, probabilityOfGood } from './loss';
import type { Fit, FitProblem, Grid, Path } from './problem';
import { Solver } from './solver';
import { requireLambda, requireProblem } from './validation';

/** Default of the largest optimality residual of a fit that is reported. */
export const FIT_TOLERANCE = 1e-9;

/** Ratio of neighbouring lambdas on the way to a cold one, and how many there are at most. */
const APPROACH_RATIO = 0.25;
const APPROACH_STEPS = 30;

export interface FitOptions {
  /** Largest optimality residual of a converged fit; default 1e-9. */
  readonly tolerance?: number;
  readonly mostIterations?: number;
  /** Called with the objective after each accepted iteration of each fit, also of those on the way. */
  readonly onIteration?: (objective: number) => void;
}

/**
 * Deviance of the weighted intercept only (with the offset, if there is one): Newton in one dimension, held inside the bracket that the smallest and
 * the largest offset give.
 * @returns 2 sum w_i [log(1 + e^eta_i) - y_i eta_i], weights as given
 * @throws NumericError for bad arguments
 * @example nullDeviance({ columns: [], outcome: Uint8Array.of(1, 1, 1, 0), penalty: { mixing: 1, standardize: true } }) // 4.4987
 */
export function nullDeviance(problem: FitProblem): number {
  requireProblem(problem);
  return devianceOfIntercept(problem);
}

function devianceOfIntercept(problem: FitProblem): number {
  const { outcome, weights, offset } = problem;
  let good = 0;
  let total = 0;
  for (let i = 0; i < outcome.length; i++) {
    const w = weights ? weights[i] : 1;
    total += w;
    good += w * outcome[i];
  }
  const logOdds = Math.log(good / (total - good));
  const intercept = offset ? interceptWith(offset, outcome, weights, logOdds) : logOdds;
  let sum = 0;
  for (let i = 0; i < outcome.length; i++)
    sum += (weights ? weights[i] : 1) * rowLoss(intercept + (offset ? offset[i] : 0), outcome[i]);
  return 2 * sum;
}

/** The intercept that goes with an offset: where sum w (P - y), which rises with it, is 0. */
function interceptWith(offset: Float64Array, outcome: Uint8Array, weights: Float64Array | undefined, logOdds: number): number {
  let low = logOdds - offset.reduce((a, b) => Math.max(a, b), -Infinity);
  let high = logOdds - offset.reduce((a, b) => Math.min(a, b), Infinity);
  let intercept = (low + high) / 2;
  // Each round either takes a Newton step or halves the bracket, of which no double has room for more than about 2,100.
  for (let round = 0; round < 2200 && low < high; round++) {
    let gradient = 0;
    let curvature = 0;
    for (let i = 0; i < outcome.length; i++) {
      const w = weights ? weights[i] : 1;
      const p = probabilityOfGood(intercept + offset[i]);
      gradient += w * (p - outcome[i]);
      curvature += w * p * probabilityOfGood(-intercept - offset[i]);
    }
    if (gradient === 0) break;
    if (gradient < 0) low = intercept;
    else high = intercept;
    const newton = intercept - gradient / curvature;
    const next = newton > low && newton < high ? newton : (low + high) / 2;
    if (Math.abs(next - intercept) <= 1e-15 * Math.max(1, Math.abs(intercept))) return next;
    intercept = next;
  }
  return intercept;
}

function solverOf(problem: FitProblem): Solver {
  const { penalty } = withDuplicatesHeld(problem);
  return new Solver(problem, penalty, problem.weights);
}

/** Fits intercept and unpenalised columns and returns the largest lambda; the solver is left at that fit. */
export function startAtLargest(solver: Solver): number {
  solver.solve(0, { tolerance: 1e-13, mostIterations: 60, unpenalisedOnly: true });
  return solver.largestLambda();
}

/** Brings a solver from the largest lambda near to `lambda` by a short, loosely solved path. */
export function approach(solver: Solver, from: number, lambda: number, options: FitOptions = {}): void {
  const last = lambda > 0 ? lambda / APPROACH_RATIO : from * 1e-4;
  const first = Math.min(from * APPROACH_RATIO, last / APPROACH_RATIO ** APPROACH_STEPS);
  for (let step = first; step >= last && step > 0; step *= APPROACH_RATIO) {
    solver.solve(step, { tolerance: Math.max(1e-3 * step, 1e-7), mostIterations: 50, onIteration: options.onIteration });
  }
}

/**
 * Largest lambda: at it no penalised column is in the model, just below it one is (mixing of at least 0.001).
 * max over m_j > 0 of |g_j| / m_j / max(mixing, 0.001), g_j the gradient at the fit of intercept and unpenalised columns; with a limit at 0 only
 * the inward gradient counts. Where unpenalised columns separate goods from bads there is no such fit; the value is then that of the point the
 * solver came to, and every fit of such a path says "separation".
 * @param problem as for `fitAt`
 * @returns 0 when no penalised column has variance
 * @throws NumericError for bad arguments
 * @example largestLambda({ columns, outcome, penalty: { mixing: 1, standardize: true } })
 * Source: J. Friedman, T. Hastie and R. Tibshirani, J. Statistical Software 33(1), 2010, section 2.5.
 */
export function largestLambda(problem: FitProblem): number {
  requireProblem(problem);
  return startAtLargest(new Solver(problem, problem.penalty, problem.weights));
}

/**
 * Fits at every lambda of a grid, each started from the one before.
 *
 * An automatic grid is logarithmic from the largest lambda to smallestRatio times it and stops early, when asked to, once the explained share of
 * deviance gains less than 1e-5 over the previous value from the fifth value on, or exceeds 0.999; `stoppedBecause` says which. A stated grid never
 * stops and keeps its order.
 * @param problem p columns of n values, outcome, weights, offset and penalty
 * @param grid stated lambdas, or count and smallest ratio of an automatic grid
 * @param options `tolerance` of the residual (default 1e-9), and callbacks
 * @returns one fit per lambda with coefficients on the scale of x, null deviance and largest lambda
 * @throws NumericError for bad arguments, with the place; what data do to a fit (separation, an iteration limit) is its status
 * @example fitPath({ columns, outcome, penalty: { mixing: 1, standardize: true } }, { count: 100, smallestRatio: 1e-4, earlyStop: true }).fits
 * Source: J. Friedman, T. Hastie and R. Tibshirani, J. Statistical Software 33(1), 2010, sections 2.5 and 3.
 */
export function fitPath(
  problem: FitProblem,
  grid: Grid,
  options: FitOptions & { readonly onFit?: (fit: Fit, index: number, count: number) => void } = {},
): Path {
  requireProblem(problem);
  const solver = solverOf(problem);
  const largest = startAtLargest(solver);
  const automatic = !('lambdas' in grid);
  const lambdas = automatic ? automaticGrid(largest, grid.count, grid.smallestRatio) : Array.from(grid.lambdas);
  lambdas.forEach(requireLambda);
  const nullValue = devianceOfIntercept(problem);
  const fits: Fit[] = [];
  let stoppedBecause: Path['stoppedBecause'];
  if (lambdas.length > 0) approach(solver, largest, lambdas[0], options);
  for (const [index, lambda] of lambdas.entries()) {
    const fit = solver.solve(lambda, { ...options, tolerance: options.tolerance ?? FIT_TOLERANCE });
    fits.push(fit);
    options.onFit?.(fit, index, lambdas.length);
    if (!automatic || !grid.earlyStop || index === 0) continue;
    const explained = 1 - fit.deviance / nullValue;
    const gain = (fits[index - 1].deviance - fit.deviance) / nullValue;
    if (index === lambdas.length - 1) break;
    if (explained > 0.999) stoppedBecause = 'explained';
    else if (index >= 4 && gain < 1e-5) stoppedBecause = 'little-gain';
    if (stoppedBecause) break;
  }
  const told = { fits, nullDeviance: nullValue, largestLambda: largest, stoppedEarly: stoppedBecause !== undefined };
  return stoppedBecause ? { ...told, stoppedBecause } : told;
}

/**
 * Logarithmic grid of `count` values from `largest` to `smallestRatio` times it, falling.
 * @param largest above 0
 * @param count whole number of at least 1
 * @param smallestRatio strictly between 0 and 1; 1e-4 is usual, 1e-2 with fewer rows than columns
 * @throws NumericError for arguments outside
 * @example automaticGrid(1, 3, 0.01) // [1, 0.1, 0.01]
 * Source: as `fitPath`.
 */
export function automaticGrid(largest: number, count: number, smallestRatio: number): number[] {
  requireThat(Number.isInteger(count) && count >= 1, 'count', 'count must be a whole number of at least 1.');
  requireThat(smallestRatio > 0 && smallestRatio < 1, 'smallestRatio', 'the smallest ratio lies strictly between 0 and 1.');
  requireThat(largest < Infinity, 'grid', 'the largest lambda is infinite.');
  requireThat(largest > 0, 'grid', 'no penalised column has a gradient at all, so there is no largest lambda to start from.');
  return Array.from({ length: count }, (_, k) =>
    k === 0 ? largest : largest * Math.exp((Math.log(smallestRatio) * k) / (count - 1)),
  );
}

/**
 * Fit at one lambda: from `start`, or cold by a short path from the largest lambda.
 * @param problem p columns of n values, outcome (1 good, 0 bad), weights, offset and penalty
 * @param lambda at least 0; 0 is the unpenalised fit
 * @param options `tolerance` of the residual (default 1e-9), `start`, `mostIterations`
 * @returns coefficients on the scale of x, objective, deviance, optimality residual, iterations and status
 * @throws NumericError for bad arguments, with the place; what data do to a fit (separation, an iteration limit) is its status
 * @example fitAt({ columns, outcome, penalty: { mixing: 1, standardize: true } }, 0.01).coefficients
 * Source: as `fitPath`; the quadratic model, the strong rule and the conditions are named where they are used.
 */
export function fitAt(problem: FitProblem, lambda: number, options: FitOptions & { readonly start?: Fit } = {}): Fit {
  requireProblem(problem);
  requireLambda(lambda);
  const solver = solverOf(problem);
  if (options.start) solver.startFrom(options.start.intercept, options.start.coefficients);
  else approach(solver, startAtLargest(solver), lambda, options);
  return solver.solve(lambda, { ...options, tolerance: options.tolerance ?? FIT_TOLERANCE });
}
