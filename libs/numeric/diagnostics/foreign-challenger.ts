// The package is untyped; a reference makes its declaration part of every program that includes this file, whatever its tsconfig includes.
// eslint-disable-next-line @typescript-eslint/triple-slash-reference -- an ambient module declaration cannot be imported
/// <reference path="./ml-logistic-regression.d.ts" />
import LogisticRegression from 'ml-logistic-regression';
import { Matrix } from 'ml-matrix';
import { requireThat } from '../checks';
import { NumericError } from '../errors';
import { Design } from '../penalised/design';
import type { FitProblem } from '../penalised/problem';
import { requireProblem } from '../penalised/validation';

/** Above this the package's dense steps take too long for a check. */
export const MOST_CHALLENGER_ROWS = 5000;

/**
 * Unpenalised logistic regression by a library that shares nothing with this one: plain gradient descent of ml-logistic-regression 2.0.0, which has
 * neither intercept nor penalty nor weights. A constant column is added, columns are standardised and the result is brought back to the scale of x.
 * It agrees with the unpenalised fit to about 1e-3. Penalty, multipliers and limits of the problem are not used.
 * @param problem as for `fitAt`
 * @param options `steps` of gradient descent, default 3000
 * @returns intercept and coefficients of ln(good:bad) on the scale of x
 * @throws NumericError for more than 5,000 rows, weights that differ, an offset
 * @example fitForeignChallenger({ columns, outcome, penalty: { mixing: 1, standardize: true } }).coefficients
 */
export function fitForeignChallenger(
  problem: FitProblem,
  options: { steps?: number } = {},
): { intercept: number; coefficients: Float64Array } {
  requireProblem(problem);
  const { outcome, weights, offset } = problem;
  const rows = outcome.length;
  if (rows > MOST_CHALLENGER_ROWS) {
    throw new NumericError('too-many-rows', `${rows} rows; the challenger takes ${MOST_CHALLENGER_ROWS} at most.`, { rows });
  }
  requireThat(!weights || weights.every((w) => w === weights[0]), 'weights', 'the challenger takes no weights.');
  requireThat(!offset, 'offset', 'the challenger takes no offset.');
  const design = new Design(problem.columns, rows);
  const { used, centre, scale } = design;
  const features = Matrix.ones(rows, used.length + 1);
  used.forEach((j, a) => {
    for (let i = 0; i < rows; i++) features.set(i, a + 1, (problem.columns[j][i] - centre[j]) / scale[j]);
  });
  const model = new LogisticRegression({ numSteps: options.steps ?? 3000, learningRate: 1 / rows });
  model.train(features, Matrix.columnVector(Array.from(outcome)));
  // Its first classifier tells class 0 (bad) from the rest, with the rest as 1: its predictor is ln(good:bad).
  const found = model.classifiers[0].weights.getRow(0);
  const coefficients = new Float64Array(problem.columns.length);
  let intercept = found[0];
  used.forEach((j, a) => {
    coefficients[j] = found[a + 1] / scale[j];
    intercept -= coefficients[j] * centre[j];
  });
  return { intercept, coefficients };
}
