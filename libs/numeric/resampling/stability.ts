import { requireThat } from '../checks';
import { NumericError } from '../errors';
import { quantilesType7 } from '../metrics/ordering';
import { requireLevel } from '../metrics/wilson';
import { withDuplicatesHeld } from '../penalised/duplicates';
import { approach, startAtLargest } from '../penalised/path';
import type { Fit, FitProblem } from '../penalised/problem';
import { Solver } from '../penalised/solver';
import { requireLambda, requireProblem } from '../penalised/validation';
import { scaleFactor } from '../scaling/points';
import { stratifiedBootstrap } from './bootstrap';

/** The fit of one resample. */
export interface Draw {
  readonly resample: number;
  readonly intercept: number;
  readonly coefficients: Float64Array;
  readonly converged: boolean;
}

export interface ResampleOptions {
  readonly seed: number;
  /** Number of the first resample, default 0: batches with the same seed and different numbers add up to one study. */
  readonly first?: number;
  readonly count: number;
  /** Largest optimality residual of a resample's fit; default 1e-6. */
  readonly tolerance?: number;
  /** The fit on all rows, from which resamples start; fitted when absent. */
  readonly start?: Fit;
  readonly onResample?: (done: number, count: number) => void;
}

/**
 * Refits at one lambda on stratified bootstrap resamples, columns held fixed, each with its own standardisation. Draw b depends on seed and b alone.
 * @param problem as for `fitAt`
 * @param lambda at least 0
 * @param options seed, number of resamples and the number of the first
 * @returns one draw per resample, in order; `converged` false where its fit is separated or reached its iteration limit
 * @throws NumericError as `fitAt`, and for a count or a seed outside
 * @example stabilityOfCoefficients(resampleFits(problem, 0.01, { seed: 1, count: 200 }), fit)
 */
export function resampleFits(problem: FitProblem, lambda: number, options: ResampleOptions): Draw[] {
  requireProblem(problem);
  requireLambda(lambda);
  requireThat(
    Number.isInteger(options.count) && options.count >= 1,
    'count',
    'the number of resamples is a whole number of at least 1.',
  );
  const tolerance = options.tolerance ?? 1e-6;
  const { penalty } = withDuplicatesHeld(problem);
  const solver = new Solver(problem, penalty, problem.weights);
  if (options.start) solver.startFrom(options.start.intercept, options.start.coefficients);
  else approach(solver, startAtLargest(solver), lambda);
  const centre = solver.solve(lambda, { tolerance });
  solver.keep();
  const first = options.first ?? 0;
  const draws: Draw[] = [];
  const weights = new Float64Array(problem.outcome.length);
  for (let b = first; b < first + options.count; b++) {
    const counts = stratifiedBootstrap(problem.outcome, options.seed, b);
    for (let i = 0; i < weights.length; i++) weights[i] = counts[i] * (problem.weights ? problem.weights[i] : 1);
    // Each starts at the fit of all rows with its curvature, which is the average of theirs; nothing is carried from one resample to the next.
    solver.weigh(weights);
    solver.startFrom(centre.intercept, centre.coefficients);
    const fit = solver.solveFromKept(lambda, { tolerance });
    draws.push({ resample: b, intercept: fit.intercept, coefficients: fit.coefficients, converged: fit.status === 'converged' });
    options.onResample?.(b - first + 1, options.count);
  }
  return draws;
}

/** How one number behaves over resamples. */
export interface Stability {
  /** Share of resamples in which it is not 0. */
  readonly shareSelected: number;
  /** Share of resamples with the sign of the fit's own value; null where that is 0. */
  readonly shareSameSign: number | null;
  readonly lower: number;
  readonly median: number;
  readonly upper: number;
  readonly mean: number;
  readonly standardDeviation: number;
}

function stabilityOf(values: Float64Array, reference: number, level: number): Stability {
  const count = values.length;
  const [lower, median, upper] = quantilesType7(values, [(1 - level) / 2, 0.5, (1 + level) / 2]);
  const mean = values.reduce((sum, value) => sum + value, 0) / count;
  const spread = values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / Math.max(1, count - 1);
  const selected = values.reduce((sum, value) => sum + (value !== 0 ? 1 : 0), 0);
  const same = values.reduce((sum, value) => sum + (Math.sign(value) === Math.sign(reference) ? 1 : 0), 0);
  return {
    shareSelected: selected / count,
    shareSameSign: reference === 0 ? null : same / count,
    lower,
    median,
    upper,
    mean,
    standardDeviation: Math.sqrt(spread),
  };
}

function requireDraws(draws: readonly Draw[], level: number): void {
  requireLevel(level);
  if (draws.length < 2) throw new NumericError('no-rows', 'At least two resamples are needed.', { name: 'draws' });
}

/**
 * Stability of intercept and coefficients: share selected, share with the same sign, percentile interval (type 7) at `level`.
 * @param draws at least two
 * @param fit the fit on all rows, whose signs are compared with; coefficients on the scale of x
 * @param level of confidence, strictly between 0 and 1
 * @throws NumericError for fewer than two draws, a level outside
 * @example stabilityOfCoefficients(draws, fit).coefficients[0].shareSelected
 * Source: N. Meinshausen and P. Bühlmann, Stability selection, J. Royal Statistical Society B 72, 2010 (shares); Efron and Tibshirani, 1993, chapter 13.
 */
export function stabilityOfCoefficients(
  draws: readonly Draw[],
  fit: { intercept: number; coefficients: ArrayLike<number> },
  level = 0.95,
): { intercept: Stability; coefficients: Stability[] } {
  requireDraws(draws, level);
  const column = (value: (draw: Draw) => number): Float64Array => Float64Array.from(draws, value);
  return {
    intercept: stabilityOf(
      column((draw) => draw.intercept),
      fit.intercept,
      level,
    ),
    coefficients: Array.from(fit.coefficients, (reference, j) =>
      stabilityOf(
        column((draw) => draw.coefficients[j]),
        reference,
        level,
      ),
    ),
  };
}

/**
 * Stability of the points of each bin, base form (Factor b_j WOE_ij), WOE held fixed: [characteristic][bin]. A bin with WOE 0 has points 0 always.
 * @param draws at least two
 * @param fit the fit on all rows, whose signs are compared with
 * @param woe weights of evidence of each characteristic's bins, in the order of coefficients
 * @param pointsToDouble PDO, above 0
 * @param level of confidence, strictly between 0 and 1
 * @throws NumericError as `stabilityOfCoefficients`
 * @example stabilityOfPoints(draws, fit, [[0.4, -0.3]], 20)[0][1].median // in points
 * Source: as `stabilityOfCoefficients`.
 */
export function stabilityOfPoints(
  draws: readonly Draw[],
  fit: { coefficients: ArrayLike<number> },
  woe: readonly ArrayLike<number>[],
  pointsToDouble: number,
  level = 0.95,
): Stability[][] {
  requireDraws(draws, level);
  const factor = scaleFactor(pointsToDouble);
  return woe.map((bins, j) =>
    Array.from(bins, (value) =>
      stabilityOf(
        Float64Array.from(draws, (draw) => factor * draw.coefficients[j] * value),
        factor * fit.coefficients[j] * value,
        level,
      ),
    ),
  );
}

/**
 * Fits resamples and summarises: `resampleFits`, then `stabilityOfCoefficients` and, where WOE and PDO are given, `stabilityOfPoints`.
 * @param problem and fit the problem and its fit on all rows, whose lambda is used
 * @returns draws, whether all converged, stability of intercept, coefficients and (or null) points
 * @throws NumericError as `resampleFits`
 * @example stabilityOfFit(problem, fit, { seed: 1, count: 200 }).coefficients[0].lower
 * Source: as `stabilityOfCoefficients`.
 */
export function stabilityOfFit(
  problem: FitProblem,
  fit: Fit,
  options: Omit<ResampleOptions, 'start'> & { level?: number; woe?: readonly ArrayLike<number>[]; pointsToDouble?: number },
) {
  const draws = resampleFits(problem, fit.lambda, { ...options, start: fit });
  const { woe, pointsToDouble } = options;
  return {
    draws,
    converged: draws.every((draw) => draw.converged),
    ...stabilityOfCoefficients(draws, fit, options.level),
    points: woe && pointsToDouble !== undefined ? stabilityOfPoints(draws, fit, woe, pointsToDouble, options.level) : null,
  };
}
