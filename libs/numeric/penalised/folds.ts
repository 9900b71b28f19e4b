import { requireSameLength, requireThat } from '../checks';
import { NumericError } from '../errors';
import { withDuplicatesHeld } from './duplicates';
import { rowLoss } from './loss';
import { approach, startAtLargest } from './path';
import type { Fit, FitProblem, FitStatus } from './problem';
import { Solver } from './solver';
import { requireBothOutcomes, requireLambda, requireProblem } from './validation';

export interface FoldResult {
  /** From 1. */
  readonly fold: number;
  /** Weight of the held-out rows. */
  readonly weight: number;
  /** Weighted mean of -2 log likelihood over the held-out rows at each lambda. */
  readonly deviance: number[];
}

export interface CrossValidation {
  readonly lambdas: number[];
  readonly folds: FoldResult[];
  /** Over folds, weighted by fold weight. */
  readonly mean: number[];
  readonly standardError: number[];
  /** Index (from 0) of the smallest mean; ties go to the largest lambda. */
  readonly minimum: number;
  /** Index of the largest lambda with a mean of at most the minimum plus its standard error. */
  readonly oneStandardError: number;
  /** The minimum lies at the smallest lambda or at the largest. */
  readonly atGridEnd: boolean;
  /** Largest optimality residual of any fold's fit. */
  readonly optimalityResidual: number;
  readonly converged: boolean;
  /** The fits that did not converge, absent when all did: fold (from 1), index of lambda (from 0), what happened. */
  readonly failures?: readonly FoldFailure[];
}

export interface FoldFailure {
  readonly fold: number;
  readonly index: number;
  readonly status: Exclude<FitStatus, 'converged'>;
}

export interface CrossValidationOptions {
  /** Largest optimality residual of a fold's fit; default 1e-7. */
  readonly tolerance?: number;
  /** Columns of one fold, computed from its training rows (1 = training) for all rows; null = the same columns. */
  readonly columnsForFold?: (fold: number, training: Uint8Array) => readonly Float64Array[] | null;
  readonly onFold?: (done: number, count: number) => void;
  /** Each fold's fit at each lambda, with eta of all rows (a buffer that is used again). */
  readonly onFoldFit?: (fold: number, index: number, fit: Fit, eta: Float64Array) => void;
}

const FOLD_TOLERANCE = 1e-7;

/**
 * K-fold cross-validation of the penalty: every fold is fitted on the others at exactly the same lambdas, standardised with its own training rows.
 * @param problem as for `fitAt`
 * @param folds fold of each of n rows, 1..K, each with rows
 * @param lambdas at least one, each at least 0, in any order
 * @returns deviance per row (weighted mean of -2 log likelihood) by fold and lambda, mean, standard error, both choices; `failures` names fold and
 *   lambda of every fit that did not converge
 * @throws NumericError for bad arguments and for a fold whose training rows have one class only (names the fold)
 * @example crossValidate(problem, folds, path.fits.map((fit) => fit.lambda)).oneStandardError
 * Source: L. Breiman et al., Classification and Regression Trees, 1984 (one-standard-error rule); mean and error as in J. Friedman et al., 2010.
 */
export function crossValidate(
  problem: FitProblem,
  folds: Uint8Array,
  lambdas: readonly number[],
  options: CrossValidationOptions = {},
): CrossValidation {
  const count = requireFolds(problem, folds, lambdas);
  // What a fold holds is what all rows hold: the folds then speak of the fit that is reported.
  const held = withDuplicatesHeld(problem);
  let optimalityResidual = 0;
  const failures: FoldFailure[] = [];
  const results: FoldResult[] = [];
  for (let fold = 1; fold <= count; fold++) {
    const result = fitFold(held, folds, fold, lambdas, options, (fit, index) => {
      optimalityResidual = Math.max(optimalityResidual, fit.optimalityResidual);
      if (fit.status !== 'converged') failures.push({ fold, index, status: fit.status });
    });
    results.push(result);
    options.onFold?.(fold, count);
  }
  const told = { ...summarise(lambdas, results), optimalityResidual, converged: failures.length === 0 };
  return failures.length > 0 ? { ...told, failures } : told;
}

/** A fold's training rows, and the weights that its fit is made with. */
export interface FoldTraining {
  /** 1 = training. */
  readonly training: Uint8Array;
  readonly weights: Float64Array;
  /** Weight of the rows held out. */
  readonly heldOut: number;
}

/** Number of folds. @throws NumericError for arguments of a cross-validation that do not fit together */
export function requireFolds(problem: FitProblem, folds: Uint8Array, lambdas: readonly number[]): number {
  requireProblem(problem);
  requireSameLength('folds', folds.length, problem.outcome.length);
  requireThat(lambdas.length > 0, 'lambdas', 'at least one lambda is needed.');
  lambdas.forEach(requireLambda);
  const count = folds.reduce((most, fold) => Math.max(most, fold), 0);
  requireThat(count >= 2, 'folds', 'at least two folds are needed.');
  return count;
}

/** @throws NumericError for a fold without weight, or whose training rows have one class only (names the fold) */
export function trainingOf(problem: FitProblem, folds: Uint8Array, fold: number): FoldTraining {
  const rows = folds.length;
  const training = new Uint8Array(rows);
  const weights = new Float64Array(rows);
  let heldOut = 0;
  for (let i = 0; i < rows; i++) {
    if (folds[i] === 0)
      throw new NumericError('out-of-range', `Row ${i} is in fold 0; folds start at 1.`, { name: 'folds', index: i });
    const weight = problem.weights ? problem.weights[i] : 1;
    if (folds[i] === fold) heldOut += weight;
    else {
      training[i] = 1;
      weights[i] = weight;
    }
  }
  if (!(heldOut > 0)) throw new NumericError('no-rows', `Fold ${fold} has no row with weight.`, { name: 'folds', fold });
  try {
    requireBothOutcomes(problem.outcome, weights);
  } catch (error) {
    if (!(error instanceof NumericError)) throw error;
    throw new NumericError(error.code, `Fold ${fold}: ${error.message}`, { ...error.where, fold });
  }
  return { training, weights, heldOut };
}

/** One fold fitted on the others at every lambda; `record` sees each fit. */
export function fitFold(
  problem: FitProblem,
  folds: Uint8Array,
  fold: number,
  lambdas: readonly number[],
  options: CrossValidationOptions,
  record: (fit: Fit, index: number) => void,
): FoldResult {
  const rows = folds.length;
  const { training, weights, heldOut } = trainingOf(problem, folds, fold);
  const columns = options.columnsForFold?.(fold, training) ?? problem.columns;
  columns.forEach((column, j) => requireSameLength(`column ${j} of fold ${fold}`, column.length, rows));
  requireSameLength(`columns of fold ${fold}`, columns.length, problem.columns.length);
  const solver = new Solver({ ...problem, columns }, problem.penalty, weights);
  approach(solver, startAtLargest(solver), lambdas[0]);
  const deviance = lambdas.map((lambda, index) => {
    const fit = solver.solve(lambda, { tolerance: options.tolerance ?? FOLD_TOLERANCE });
    record(fit, index);
    options.onFoldFit?.(fold, index, fit, solver.eta);
    let sum = 0;
    for (let i = 0; i < rows; i++) {
      if (folds[i] === fold) sum += (problem.weights ? problem.weights[i] : 1) * rowLoss(solver.eta[i], problem.outcome[i]);
    }
    return (2 * sum) / heldOut;
  });
  return { fold, weight: heldOut, deviance };
}

/**
 * Mean, standard error sqrt(weighted mean of (fold - mean)^2 / (K - 1)) and the two rules of choice.
 * @param lambdas and folds K results with one deviance for each lambda
 * @example summarise([0.2, 0.1], folds).minimum // index of the smallest mean
 * Source: as `crossValidate`.
 */
export function summarise(
  lambdas: readonly number[],
  folds: FoldResult[],
): Omit<CrossValidation, 'optimalityResidual' | 'converged' | 'failures'> {
  const total = folds.reduce((sum, { weight }) => sum + weight, 0);
  const mean = lambdas.map((_, k) => folds.reduce((sum, fold) => sum + fold.weight * fold.deviance[k], 0) / total);
  const standardError = lambdas.map((_, k) => {
    const spread = folds.reduce((sum, fold) => sum + fold.weight * (fold.deviance[k] - mean[k]) ** 2, 0) / total;
    return Math.sqrt(spread / (folds.length - 1));
  });
  const better = (a: number, b: number): boolean => mean[a] < mean[b] || (mean[a] === mean[b] && lambdas[a] > lambdas[b]);
  const minimum = mean.reduce((best, _, k) => (better(k, best) ? k : best), 0);
  const limit = mean[minimum] + standardError[minimum];
  const oneStandardError = mean.reduce((best, value, k) => (value <= limit && lambdas[k] > lambdas[best] ? k : best), minimum);
  const chosen = lambdas[minimum];
  const atGridEnd = chosen === Math.min(...lambdas) || chosen === Math.max(...lambdas);
  return { lambdas: Array.from(lambdas), folds, mean, standardError, minimum, oneStandardError, atGridEnd };
}
