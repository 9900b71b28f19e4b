import { requireFinite, requireSameLength } from '../checks';
import { Design, addColumns } from './design';
import { lossAndResidual } from './loss';
import { penaltyAt, scaledPenalty, violation } from './penalty';
import type { FitProblem } from './problem';
import { requireLambda, requireProblem } from './validation';

type Point = { readonly intercept: number; readonly coefficients: Float64Array; readonly lambda: number };

/**
 * eta = intercept + sum_j coefficient_j x_j + offset.
 * @param columns p arrays of n values
 * @param intercept b0
 * @param coefficients p values on the scale of x
 * @param offset n values added to eta
 * @returns n values of ln(good:bad)
 * @throws NumericError for different lengths, NaN in an argument, and an eta that is not finite (names its row): a column has NaN there
 * @example linearPredictor([Float64Array.of(1, 2)], 0.5, Float64Array.of(2)) // [2.5, 4.5]
 */
export function linearPredictor(
  columns: readonly Float64Array[],
  intercept: number,
  coefficients: ArrayLike<number>,
  offset?: Float64Array,
): Float64Array {
  requireSameLength('coefficients', coefficients.length, columns.length);
  requireFinite('coefficients', coefficients);
  requireFinite('intercept', [intercept]);
  const rows = columns[0]?.length ?? offset?.length ?? 0;
  columns.forEach((column, j) => requireSameLength(`column ${j}`, column.length, rows));
  const eta = new Float64Array(rows);
  if (offset) requireSameLength('offset', offset.length, rows);
  addColumns(columns, intercept, coefficients, offset, eta);
  requireFinite('eta', eta);
  return eta;
}

function at(problem: FitProblem, point: Point) {
  requireProblem(problem);
  requireLambda(point.lambda);
  requireSameLength('coefficients', point.coefficients.length, problem.columns.length);
  requireFinite('coefficients', point.coefficients);
  requireFinite('intercept', [point.intercept]);
  const design = new Design(problem.columns, problem.outcome.length, problem.weights);
  const eta = new Float64Array(design.rows);
  addColumns(problem.columns, point.intercept, point.coefficients, problem.offset, eta);
  const residual = new Float64Array(design.rows);
  const loss = lossAndResidual(eta, problem.outcome, design.share, residual);
  return { design, residual, loss, penalty: scaledPenalty(problem.penalty, design) };
}

/**
 * Mean loss plus penalty at a point, from the definition: (1/W) sum w [log(1 + e^eta) - y eta] + lambda sum m [mixing |t| + (1 - mixing)/2 t^2].
 * @param problem as for `fitAt`
 * @param point intercept, coefficients on the scale of x, and lambda
 * @returns nats per row
 * @throws NumericError for bad arguments
 * @example objective(problem, fitAt(problem, 0.01)) // the fit's own objective
 * Source: J. Friedman, T. Hastie and R. Tibshirani, J. Statistical Software 33(1), 2010, eq. (14).
 */
export function objective(problem: FitProblem, point: Point): number {
  const { design, loss, penalty } = at(problem, point);
  let total = loss;
  for (const j of design.used) {
    const t = point.coefficients[j] * design.scale[j];
    if (t !== 0) total += penaltyAt(point.lambda, penalty.absolute[j] * Math.abs(t) + (penalty.square[j] / 2) * t * t);
  }
  return total;
}

/**
 * Largest violation of the optimality conditions at a point, from the exact gradient, on the standardised scale (on the scale of x when not
 * standardising): 0 at the optimum. It depends on the point alone and not on how it was found. A coordinate that is not 0 counts with
 * |g + lambda m (mixing sign t + (1 - mixing) t)|, one at 0 with the excess of |g| over lambda m mixing, one on a limit with what points inward.
 * @param problem as for `fitAt`
 * @param point intercept, coefficients on the scale of x, and lambda
 * @throws NumericError for bad arguments
 * @example optimalityResidual(problem, fitAt(problem, 0.01)) // at most 1e-9
 * Source: J. Friedman, T. Hastie and R. Tibshirani, J. Statistical Software 33(1), 2010; the conditions are those of Karush, Kuhn and Tucker.
 */
export function optimalityResidual(problem: FitProblem, point: Point): number {
  const { design, residual, penalty } = at(problem, point);
  const gradient = new Float64Array(problem.columns.length);
  design.gradient(residual, design.used, gradient);
  let largest = Math.abs(residual.reduce((sum, r) => sum + r, 0));
  for (const j of design.used) {
    const t = point.coefficients[j] * design.scale[j];
    const l1 = penaltyAt(point.lambda, penalty.absolute[j]);
    const l2 = penaltyAt(point.lambda, penalty.square[j]);
    // A coefficient read back on the scale of x can miss its limit by a rounding; it counts as lying on it.
    const lower = nearLimit(t, penalty.lower[j]) ? t : penalty.lower[j];
    const upper = nearLimit(t, penalty.upper[j]) ? t : penalty.upper[j];
    largest = Math.max(largest, violation(t, gradient[j], l1, l2, lower, upper) * penalty.reporting[j]);
  }
  return largest;
}

function nearLimit(t: number, limit: number): boolean {
  return Number.isFinite(limit) && limit !== 0 && Math.abs(t - limit) <= 1e-12 * Math.abs(limit);
}
