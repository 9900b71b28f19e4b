import {
  crossValidate,
  fitFold,
  requireFolds,
  summarise,
  trainingOf,
  type CrossValidation,
  type CrossValidationOptions,
  type FoldFailure,
} from '../penalised/folds';
import { withDuplicatesHeld } from '../penalised/duplicates';
import { fitAt, fitPath, type FitOptions } from '../penalised/path';
import type { Fit, FitProblem, Grid, Path } from '../penalised/problem';
import { requireLambda, requireProblem } from '../penalised/validation';
import { resampleFits, type Draw, type ResampleOptions } from '../resampling/stability';
import { requireThat } from '../checks';
import { codedColumns, type CodedProblem } from './coded-columns';
import type { Crew } from './crew';
import { Engine } from './engine';
import { FoldValues } from './fold-values';

/** Which solver a result comes from, and why where the other one was expected. */
export interface SolvedBy {
  readonly solver: 'engine' | 'oracle';
  /** Why the engine was not used, or gave up; null where it did the work. */
  readonly reason: string | null;
}

export interface EngineChoice {
  /** Who works on a problem of so many cells (rows times columns); absent = the caller alone. */
  readonly crewFor?: (cells: number) => Crew;
  /** Rows from which on the engine is used; default 500. */
  readonly engineFrom?: number;
}

/** Below, the oracle takes no noticeable time. */
export const ENGINE_ROWS = 500;

/** What singles can prove of a fold or a resample. */
const SINGLES_REACH = 1e-6;

const oracle = (reason: string): SolvedBy => ({ solver: 'oracle', reason });
const ENGINE: SolvedBy = { solver: 'engine', reason: null };

/** Why the oracle has to do a problem, or null. */
function reasonAgainst(problem: FitProblem, choice: EngineChoice): string | null {
  const from = choice.engineFrom ?? ENGINE_ROWS;
  if (problem.outcome.length < from) return `fewer than ${from} rows`;
  if (problem.columns.length === 0) return 'no columns';
  if (problem.columns.length > 2000) return 'more than 2,000 columns';
  return null;
}

/** Whether unpenalised columns part goods from bads: no lambda has a finite optimum then, and the oracle says so of each fit. */
function isSeparatedAlong(problem: FitProblem, weights: Float64Array | undefined): boolean {
  const { penalty } = problem;
  const free = problem.columns.flatMap((_, j) => (penalty.multipliers && penalty.multipliers[j] === 0 ? [j] : []));
  if (free.length === 0) return false;
  const part = (values: Float64Array | undefined) => (values ? Float64Array.from(free, (j) => values[j]) : undefined);
  const small: FitProblem = {
    columns: free.map((j) => problem.columns[j]),
    outcome: problem.outcome,
    weights,
    offset: problem.offset,
    penalty: { ...penalty, multipliers: part(penalty.multipliers), lower: part(penalty.lower), upper: part(penalty.upper) },
  };
  return fitAt(small, 0, { tolerance: 1e-7 }).status === 'separation';
}

function engineOf(
  problem: FitProblem,
  choice: EngineChoice,
  more: { folds?: Uint8Array; counted?: boolean; columns?: CodedProblem['columns'] } = {},
): Engine {
  const { columns = codedColumns(problem.columns), folds, counted } = more;
  const crew = choice.crewFor?.(problem.outcome.length * problem.columns.length);
  return new Engine({ ...problem, columns }, { folds, counted, crew });
}

/** Runs work on an engine and lets its crew go whatever happens. */
function using<Value>(engine: Engine, work: (engine: Engine) => Value): Value {
  try {
    return work(engine);
  } finally {
    engine.close();
  }
}

/**
 * As `fitPath`, by the engine where that is faster: a path of penalised fits, from the largest lambda down. Fits that the engine cannot finish, and those
 * without a penalty, are the oracle's. Source of objective, grid and early stop: Friedman, Hastie and Tibshirani, Journal of Statistical Software 33 (2010).
 * @param stated p columns of n finite values, n outcomes (1 good, 0 bad), the penalty
 * @param grid a number of lambdas with their smallest ratio, or the lambdas themselves, decreasing
 * @param options.tolerance largest optimality residual, on the standardised scale; default 1e-9
 * @param options.crewFor who works on it; the numbers do not depend on that
 * @returns fits by lambda with residual and status, why the path ended early, and which solver found them
 * @throws NumericError for bad arguments, with the place; what data do to a fit (separation, an iteration limit) is its status
 * @example fastPath(problem, { count: 10, smallestRatio: 1e-2, earlyStop: true }, { tolerance: 1e-9 }).fits.length // 10
 */
export function fastPath(
  stated: FitProblem,
  grid: Grid,
  options: FitOptions & EngineChoice & { readonly onFit?: (fit: Fit, index: number, count: number) => void } = {},
): Path & SolvedBy {
  requireProblem(stated);
  const problem = withDuplicatesHeld(stated);
  const tolerance = options.tolerance ?? 1e-9;
  const slow = (reason: string): Path & SolvedBy => ({ ...fitPath(problem, grid, options), ...oracle(reason) });
  const against =
    reasonAgainst(problem, options) ??
    (options.onIteration || options.mostIterations !== undefined ? 'iterations are followed' : null) ??
    ('lambdas' in grid && grid.lambdas.length === 0 ? 'no lambdas' : null) ??
    ('lambdas' in grid && grid.lambdas.some((lambda) => lambda === 0) ? 'a fit without penalty' : null) ??
    (isSeparatedAlong(problem, problem.weights) ? 'goods and bads are separated' : null);
  if (against) return slow(against);
  const path = using(engineOf(problem, options), (engine) => engine.path(grid, { tolerance, onFit: options.onFit }));
  const failed = path.fits.find(({ status }) => status !== 'converged');
  if (failed) return slow(`the engine reached a residual of ${failed.optimalityResidual} at lambda ${failed.lambda}`);
  return { ...path, ...ENGINE };
}

/**
 * As `fitAt`, by the engine where that is faster: the fit at one lambda.
 * @param stated p columns of n finite values, n outcomes (1 good, 0 bad), the penalty
 * @param lambda at least 0; without a penalty the oracle fits
 * @param options.start a fit to begin at, for instance that from before a bin was changed
 * @returns intercept and p coefficients on the scale of x, residual, status, and which solver found them
 * @throws NumericError for bad arguments, with the place
 * @example fastFit(problem, 0.02).coefficients.length // 3
 */
export function fastFit(
  stated: FitProblem,
  lambda: number,
  options: FitOptions & EngineChoice & { readonly start?: Fit } = {},
): Fit & SolvedBy {
  requireProblem(stated);
  requireLambda(lambda);
  const problem = withDuplicatesHeld(stated);
  const slow = (reason: string): Fit & SolvedBy => ({ ...fitAt(problem, lambda, options), ...oracle(reason) });
  const against =
    reasonAgainst(problem, options) ??
    (options.onIteration || options.mostIterations !== undefined ? 'iterations are followed' : null) ??
    (lambda === 0 ? 'a fit without penalty' : null) ??
    (isSeparatedAlong(problem, problem.weights) ? 'goods and bads are separated' : null);
  if (against) return slow(against);
  const { tolerance = 1e-9, start } = options;
  const fit = using(engineOf(problem, options), (engine) => engine.fitAt(lambda, { tolerance, start }));
  if (fit.status !== 'converged') return slow(`the engine reached a residual of ${fit.optimalityResidual}`);
  return { ...fit, ...ENGINE };
}

/**
 * As `crossValidate`, by the engine where that is faster. The engine's folds reach a residual of 1e-6, and their deviances are taken on from there to the
 * optimum; `tolerance` is what the oracle is asked for. A fold that the engine gives up is fitted by the oracle.
 * Source: Stone, Journal of the Royal Statistical Society B 36 (1974); the one-standard-error rule: Breiman et al., Classification and Regression Trees (1984).
 * @param folds fold of each of the n rows, from 1 without gaps
 * @param lambdas decreasing
 * @param options.path fits of all rows at the lambdas, found before, spare finding them again
 * @param options.onProgress share of the work done, now and then; it may throw to stop
 * @returns mean deviance and its standard error by lambda, both rules' places, folds, and every fit that did not converge (`failures`)
 * @throws NumericError for bad arguments, with the place
 * @example fastCrossValidation(problem, folds, [0.05, 0.02]).folds.length // 4
 */
export function fastCrossValidation(
  stated: FitProblem,
  folds: Uint8Array,
  lambdas: readonly number[],
  options: Omit<CrossValidationOptions, 'onFoldFit'> &
    EngineChoice & { readonly path?: readonly Fit[]; readonly onProgress?: (share: number) => void } = {},
): CrossValidation & SolvedBy {
  const count = requireFolds(stated, folds, lambdas);
  const problem = withDuplicatesHeld(stated);
  const slow = (reason: string): CrossValidation & SolvedBy => ({
    ...crossValidate(problem, folds, lambdas, options),
    ...oracle(reason),
  });
  const against = reasonAgainst(problem, options) ?? (lambdas.some((lambda) => lambda === 0) ? 'a fit without penalty' : null);
  if (against) return slow(against);
  const values = new FoldValues(codedColumns(problem.columns));
  for (let fold = 1; fold <= count; fold++) {
    const { training, weights } = trainingOf(problem, folds, fold);
    if (isSeparatedAlong(problem, weights)) return slow(`goods and bads are separated in fold ${fold}`);
    if (!values.add(options.columnsForFold?.(fold, training) ?? null)) return slow(`columns of fold ${fold} cannot be coded`);
  }
  return using(engineOf(problem, options, { folds, columns: values.columns }), (engine) => {
    if (options.path && options.path.length === lambdas.length) engine.followFits(options.path);
    const found = engine.crossValidate(lambdas, {
      valuesForFold: (fold) => values.valuesOf(fold),
      onFold: options.onFold,
      onProgress: options.onProgress,
    });
    let { optimalityResidual } = found;
    const failures: FoldFailure[] = [];
    const given: number[] = [];
    const results = found.folds.map((result, k) => {
      if (result) return result;
      given.push(k + 1);
      return fitFold(problem, folds, k + 1, lambdas, options, (fit, index) => {
        optimalityResidual = Math.max(optimalityResidual, fit.optimalityResidual);
        if (fit.status !== 'converged') failures.push({ fold: k + 1, index, status: fit.status });
      });
    });
    const reason = given.length > 0 ? `the oracle fitted folds ${given.join(', ')}, which the engine gave up` : null;
    const told = { ...summarise(lambdas, results), optimalityResidual, converged: failures.length === 0 };
    return { ...told, ...(failures.length > 0 ? { failures } : {}), solver: 'engine', reason };
  });
}

/**
 * As `resampleFits`, by the engine where that is faster and a residual of 1e-6 is enough: fits of stratified bootstrap resamples at one lambda. A resample that
 * the engine gives up is fitted by the oracle. Source: Efron and Tibshirani, An Introduction to the Bootstrap (1993), chapter 6.
 * @param options.seed and the number of a resample decide its draw, so that resamples can be shared out in any way (`first`, `count`)
 * @returns intercept and coefficients of each resample, and whether it converged
 * @throws NumericError for bad arguments, with the place
 * @example fastResamples(problem, 0.02, { seed: 1, count: 3 }).draws.length // 3
 */
export function fastResamples(
  stated: FitProblem,
  lambda: number,
  options: ResampleOptions & EngineChoice,
): { draws: Draw[] } & SolvedBy {
  requireProblem(stated);
  requireLambda(lambda);
  const problem = withDuplicatesHeld(stated);
  const slow = (reason: string): { draws: Draw[] } & SolvedBy => ({
    draws: resampleFits(problem, lambda, options),
    ...oracle(reason),
  });
  const { seed, first = 0, count, tolerance = SINGLES_REACH } = options;
  requireThat(Number.isSafeInteger(seed) && seed >= 0, 'seed', 'a seed is a whole number of at least 0.');
  requireThat(Number.isInteger(count) && count >= 1, 'count', 'the number of resamples is a whole number of at least 1.');
  const against =
    reasonAgainst(problem, options) ??
    (tolerance < SINGLES_REACH ? `a residual of ${tolerance} is asked of resamples` : null) ??
    (lambda === 0 ? 'a fit without penalty' : null) ??
    (problem.penalty.multipliers?.includes(0) ? 'unpenalised columns, along which a resample can separate' : null);
  if (against) return slow(against);
  return using(engineOf(problem, options, { counted: true }), (engine) => {
    const start = options.start ?? engine.fitAt(lambda, { tolerance });
    if (start.status !== 'converged') return slow('the engine did not fit all rows');
    engine.followFits([{ ...start, lambda }]);
    const draws: Draw[] = [];
    let given = 0;
    engine.resample([lambda], { seed, first, count, tolerance }, ({ resample, intercept, coefficients, converged }) => {
      if (!converged) given++;
      draws[resample - first] = converged
        ? { resample, intercept, coefficients, converged }
        : resampleFits(problem, lambda, { ...options, first: resample, count: 1, start, onResample: undefined })[0];
      options.onResample?.(
        draws.reduce((done) => done + 1, 0),
        count,
      );
    });
    return { draws, solver: 'engine', reason: given > 0 ? `the oracle fitted ${given} resamples that the engine gave up` : null };
  });
}
