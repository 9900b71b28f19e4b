import { CholeskyDecomposition, EigenvalueDecomposition, Matrix, inverse } from 'ml-matrix';
import { NumericError } from '../errors';
import { requireFinite, requireSameLength, requireWeights } from '../checks';
import { Design } from '../penalised/design';
import { rootCurvature } from '../penalised/loss';
import { linearPredictor } from '../penalised/optimality';
import type { FitProblem } from '../penalised/problem';
import { requireProblem } from '../penalised/validation';

function designOf(columns: readonly Float64Array[], weights?: Float64Array): Design {
  if (columns.length === 0) throw new NumericError('no-rows', 'There is no column.', { name: 'columns' });
  columns.forEach((column, j) => {
    requireSameLength(`column ${j}`, column.length, columns[0].length);
    requireFinite(`column ${j}`, column);
  });
  if (weights) {
    requireSameLength('weights', weights.length, columns[0].length);
    requireWeights('weights', weights);
  }
  return new Design(columns, columns[0].length, weights);
}

/**
 * Correlation matrix of columns (Pearson, weighted if weights are given), p x p. A column without variance has NaN with every column.
 * @param columns p arrays of n values, p at least 1
 * @param weights n weights of at least 0; absent = 1 each
 * @throws NumericError for no column, different lengths, NaN (names column and row)
 * @example correlation([a, b])[0][1]
 */
export function correlation(columns: readonly Float64Array[], weights?: Float64Array): number[][] {
  const design = designOf(columns, weights);
  const { used } = design;
  const gram = design.gram(design.share.map(Math.sqrt), used);
  const size = used.length + 1;
  const place = new Map(Array.from(used, (j, a) => [j, a + 1]));
  return columns.map((_, j) =>
    columns.map((__, k) => {
      const a = place.get(j);
      const b = place.get(k);
      if (a === undefined || b === undefined) return NaN;
      return j === k ? 1 : gram[a * size + b];
    }),
  );
}

/** Share of a column's variance that may be left unexplained before it counts as exactly collinear: below that, rounding decides. */
const COLLINEAR = 1e-10;

/**
 * Classical variance inflation factors 1/(1 - R_j^2), R_j^2 of column j on the others: the diagonal of the inverse correlation matrix. Columns
 * without variance give NaN; when the columns are exactly collinear, those involved give Infinity.
 * @param columns p arrays of n values; for a scorecard the WOE columns that are kept
 * @param weights n weights of at least 0; absent = 1 each
 * @throws NumericError as `correlation`
 * @example varianceInflation([a, b]) // both 1/(1 - r^2)
 * Source: D. A. Belsley, E. Kuh and R. E. Welsch, Regression Diagnostics, Wiley 1980.
 */
export function varianceInflation(columns: readonly Float64Array[], weights?: Float64Array): Float64Array {
  return inflationOf(correlation(columns, weights));
}

/**
 * The same from a correlation matrix.
 * @param full p rows of p correlations; NaN on the diagonal for a column without variance
 * @example inflationOf([[1, 0.6], [0.6, 1]]) // [1.5625, 1.5625]
 */
export function inflationOf(full: readonly (readonly number[])[]): Float64Array {
  const varying = full.flatMap((_, j) => (Number.isNaN(full[j][j]) ? [] : [j]));
  const result = new Float64Array(full.length).fill(NaN);
  if (varying.length === 0) return result;
  const matrix = new Matrix(varying.map((j) => varying.map((k) => full[j][k])));
  const eigen = new EigenvalueDecomposition(matrix, { assumeSymmetric: true });
  // VIF_j = sum over eigenvalues of v_j^2 / eigenvalue; a zero eigenvalue makes it infinite for the columns in its vector.
  varying.forEach((j, a) => {
    let value = 0;
    eigen.realEigenvalues.forEach((eigenvalue, k) => {
      const part = eigen.eigenvectorMatrix.get(a, k) ** 2;
      if (eigenvalue > COLLINEAR) value += part / eigenvalue;
      else if (part > COLLINEAR) value = Infinity;
    });
    result[j] = value;
  });
  return result;
}

/**
 * Condition indices of the correlation matrix: sqrt(largest eigenvalue / each eigenvalue), ascending; the last is the condition number.
 * Columns without variance are left out; `largest` is NaN when none is left. Exact collinearity gives Infinity.
 * @param columns and weights as for `correlation`
 * @throws NumericError as `correlation`
 * @example conditionIndex([a, b]).largest // sqrt((1 + |r|)/(1 - |r|))
 * Source: as `varianceInflation`, chapter 3, for centred columns.
 */
export function conditionIndex(
  columns: readonly Float64Array[],
  weights?: Float64Array,
): { eigenvalues: number[]; indices: number[]; largest: number } {
  const full = correlation(columns, weights);
  const varying = columns.flatMap((_, j) => (Number.isNaN(full[j][j]) ? [] : [j]));
  if (varying.length === 0) return { eigenvalues: [], indices: [], largest: NaN };
  const matrix = new Matrix(varying.map((j) => varying.map((k) => full[j][k])));
  const eigenvalues = new EigenvalueDecomposition(matrix, { assumeSymmetric: true }).realEigenvalues
    .slice()
    .sort((a, b) => b - a);
  const indices = eigenvalues.map((value) => (value > COLLINEAR ? Math.sqrt(eigenvalues[0] / value) : Infinity));
  return { eigenvalues, indices, largest: indices[indices.length - 1] };
}

/**
 * Standard errors of an unpenalised fit from the inverse information matrix, and the covariance, intercept first. For a penalised fit they have
 * no such meaning: resample instead.
 * @param problem as for `fitAt`; its penalty is not used
 * @param fit a converged unpenalised fit of it
 * @returns errors of intercept and coefficients on the scale of x, and the (p + 1) x (p + 1) covariance
 * @example standardErrors(problem, fitAt(problem, 0)).coefficients[0]
 * @throws NumericError "singular" when columns are collinear or a column has no variance
 * Source: D. W. Hosmer and S. Lemeshow, Applied Logistic Regression, Wiley 2000, section 2.4.
 */
export function standardErrors(
  problem: FitProblem,
  fit: { intercept: number; coefficients: Float64Array },
): { intercept: number; coefficients: Float64Array; covariance: number[][] } {
  requireProblem(problem);
  const design = new Design(problem.columns, problem.outcome.length, problem.weights);
  if (design.used.length < problem.columns.length)
    throw new NumericError('singular', 'A column has no variance.', { name: 'columns' });
  const eta = linearPredictor(problem.columns, fit.intercept, fit.coefficients, problem.offset);
  const root = new Float64Array(design.rows);
  rootCurvature(eta, design.share, root);
  const gram = design.gram(root, design.used);
  const size = design.used.length + 1;
  const information = new Matrix(Array.from({ length: size }, (_, a) => Array.from(gram.subarray(a * size, (a + 1) * size))));
  if (!new CholeskyDecomposition(information).isPositiveDefinite())
    throw new NumericError('singular', 'The columns are collinear.', { name: 'columns' });
  const scaled = inverse(information).div(design.totalWeight);
  // Back from centred, scaled columns: beta_j = t_j / s_j, intercept = centred intercept - sum_j beta_j centre_j.
  const back = Matrix.eye(size, size);
  for (let j = 1; j < size; j++) {
    back.set(j, j, 1 / design.scale[j - 1]);
    back.set(0, j, -design.centre[j - 1] / design.scale[j - 1]);
  }
  const covariance = back.mmul(scaled).mmul(back.transpose());
  const error = (j: number): number => Math.sqrt(covariance.get(j, j));
  return {
    intercept: error(0),
    coefficients: Float64Array.from({ length: size - 1 }, (_, j) => error(j + 1)),
    covariance: covariance.to2DArray(),
  };
}
