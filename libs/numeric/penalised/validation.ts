import { requireFinite, requireOutcome, requireSameLength, requireThat, requireWeights } from '../checks';
import { NumericError } from '../errors';
import type { FitProblem, Penalty } from './problem';

/** Checks a problem before anything is computed; nothing is repaired. Throws a NumericError that names the argument and its place. */
export function requireProblem(problem: FitProblem): void {
  const rows = problem.outcome.length;
  if (rows === 0) throw new NumericError('no-rows', 'There is no row to fit.', { name: 'outcome' });
  requireOutcome(problem.outcome);
  problem.columns.forEach((column, j) => {
    requireSameLength(`column ${j}`, column.length, rows);
    for (let i = 0; i < rows; i++) {
      if (!Number.isFinite(column[i])) {
        throw new NumericError('not-a-number', `Column ${j} has ${column[i]} at row ${i}.`, {
          name: 'columns',
          column: j,
          index: i,
        });
      }
    }
  });
  if (problem.weights) {
    requireSameLength('weights', problem.weights.length, rows);
    requireWeights('weights', problem.weights);
  }
  if (problem.offset) {
    requireSameLength('offset', problem.offset.length, rows);
    requireFinite('offset', problem.offset);
  }
  requireBothOutcomes(problem.outcome, problem.weights);
  requirePenalty(problem.penalty, problem.columns.length);
}

/** There must be a good and a bad among the rows with weight. */
export function requireBothOutcomes(outcome: Uint8Array, weights?: Float64Array): void {
  let good = false;
  let bad = false;
  for (let i = 0; i < outcome.length; i++) {
    if (weights && weights[i] === 0) continue;
    if (outcome[i] === 1) good = true;
    else bad = true;
  }
  if (!good || !bad)
    throw new NumericError('one-class', `There is no ${good ? 'bad' : 'good'} among the rows with weight.`, { name: 'outcome' });
}

export function requirePenalty(penalty: Penalty, columns: number): void {
  requireThat(penalty.mixing >= 0 && penalty.mixing <= 1, 'mixing', `mixing is ${penalty.mixing}; it lies between 0 and 1.`);
  const { multipliers, lower, upper } = penalty;
  if (multipliers) {
    requireSameLength('multipliers', multipliers.length, columns);
    requireFinite('multipliers', multipliers);
    multipliers.forEach((m, j) => requireThat(m >= 0, 'multipliers', `The penalty multiplier of column ${j} is negative.`));
  }
  if (lower) {
    requireSameLength('lower', lower.length, columns);
    lower.forEach((limit, j) =>
      requireThat(limit <= 0, 'lower', `The lower limit of column ${j} is ${limit}; it must be at most 0.`),
    );
  }
  if (upper) {
    requireSameLength('upper', upper.length, columns);
    upper.forEach((limit, j) =>
      requireThat(limit >= 0, 'upper', `The upper limit of column ${j} is ${limit}; it must be at least 0.`),
    );
  }
}

export function requireLambda(lambda: number): void {
  requireThat(Number.isFinite(lambda) && lambda >= 0, 'lambda', `lambda is ${lambda}; it must be a number of at least 0.`);
}
