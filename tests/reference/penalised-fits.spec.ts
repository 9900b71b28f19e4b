import { describe, expect, it } from 'vitest';
import {
  fastPath,
  fitAt,
  fitIndependently,
  fitPath,
  objective,
  optimalityResidual,
  type FitProblem,
  type Path,
} from '@tallystone/numeric';
import { needOtherData, problemOf, referenceFits } from './penalised-fits';
import { expectAllRead, expectNear, expected } from './reference-files';

const withData = referenceFits.filter((fit) => !fit.data.includes('saheart') && !fit.data.includes('uci'));

describe('penalised fits against glmnet 4.1-6 and an independent Newton solve', () => {
  it('covers every case whose data may be passed on', () => {
    expect(referenceFits.filter((fit) => !withData.includes(fit)).map((fit) => fit.id)).toEqual(needOtherData);
    expect(referenceFits).toHaveLength(34);
    expect(referenceFits.reduce((sum, fit) => sum + fit.lambda_path.length, 0)).toBe(219);
  });

  // Source: expected/penalised_logistic_fits.json (glmnet 4.1-6, Debian; agreement of its two methods 1.2e-11). A residual of 1e-9 bounds a
  // coefficient's error by about 1e-9 over the smallest curvature of the design, which is near 1e-3 here: hence 1e-6.
  const engine = (problem: FitProblem, lambdas: number[]): Path => {
    const path = fastPath(problem, { lambdas }, { engineFrom: 0 });
    // What it leaves to the other solver is that solver's case, and it says why.
    if (path.solver !== 'engine') expect(path.reason).toMatch(/^(a fit without penalty|goods and bads are separated)$/);
    return path;
  };
  const solvers = { 'coordinate descent': (problem: FitProblem, lambdas: number[]) => fitPath(problem, { lambdas }), engine };
  for (const reference of withData)
    for (const [solver, solve] of Object.entries(solvers)) {
      it(`${reference.id}, ${solver}`, () => {
        const { problem, sign } = problemOf(reference);
        const path = solve(
          problem,
          reference.lambda_path.map(({ lambda }) => lambda),
        );
        expect(problem.outcome).toHaveLength(reference.n);
        expectNear(path.nullDeviance, reference.null_deviance, 1e-9 * reference.null_deviance, 'null deviance');
        expectNear(path.nullDeviance, reference.glmnet_nulldev, 1e-9 * reference.null_deviance, 'null deviance');
        if (reference.penalty_factor_given) {
          // The reference rescales factors to sum to the number of columns; here they are used as given.
          const total = reference.penalty_factor_given.reduce((sum, factor) => sum + factor, 0);
          const used = reference.penalty_factor_given.map((factor) => (factor * reference.x.length) / total);
          used.forEach((factor, j) => expectNear(problem.penalty.multipliers?.[j] ?? NaN, factor, 1e-12, 'penalty factor'));
        }
        expect(path.stoppedEarly).toBe(false);
        path.fits.forEach((fit, k) => {
          const point = reference.lambda_path[k];
          expect(fit.status).toBe('converged');
          expect(fit.optimalityResidual).toBeLessThanOrEqual(1e-9);
          // The residual and the objective again, from the definition and the reported coefficients; 1e-11 leaves room for rounding of sums.
          expectNear(optimalityResidual(problem, fit), fit.optimalityResidual, 1e-11, 'residual');
          expectNear(objective(problem, fit), point.objective, 1e-10 * point.objective, 'objective');
          expectNear(fit.objective, point.objective, 1e-10 * point.objective, 'objective');
          // The deviance is not stationary at a penalised optimum, so it carries the coefficients' first-order error.
          expectNear(fit.deviance, point.deviance, 1e-8 * point.deviance, 'deviance');
          expectNear(fit.deviance, point.glmnet_deviance, 1e-8 * point.deviance, 'deviance');
          expectNear(1 - fit.deviance / path.nullDeviance, point.dev_ratio, 1e-8, 'explained share');
          expect(fit.coefficients.filter((b) => b !== 0)).toHaveLength(point.nonzero);
          // The residual as defined here finds nothing wrong with the reference's own coefficients either.
          const theirs = {
            lambda: point.lambda,
            intercept: sign * point.intercept,
            coefficients: Float64Array.from(point.coef, (b) => sign * b),
          };
          expect(optimalityResidual(problem, theirs)).toBeLessThanOrEqual(point.kkt_max + 1e-12);
          expectNear(fit.intercept, sign * point.intercept, 1e-6, `intercept at ${point.lambda}`);
          point.coef.forEach((value, j) =>
            expectNear(fit.coefficients[j], sign * value, 1e-6, `${reference.x[j]} at ${point.lambda}`),
          );
          point.coef.forEach((value, j) => expect(fit.coefficients[j] === 0).toBe(value === 0));
        });
      });
    }
});

describe('the independent method against the same numbers', () => {
  // Source as above; 1e-6 is the agreement that a second replication asks for.
  for (const reference of withData) {
    it(reference.id, () => {
      const { problem, sign } = problemOf(reference);
      const point = reference.lambda_path[Math.min(2, reference.lambda_path.length - 1)];
      const fit = fitIndependently(problem, point.lambda, { tolerance: 1e-9 });
      expect(fit.status).toBe('converged');
      expectNear(optimalityResidual(problem, fit), fit.optimalityResidual, 1e-10, 'residual');
      expectNear(fit.intercept, sign * point.intercept, 1e-6, 'intercept');
      point.coef.forEach((value, j) => expectNear(fit.coefficients[j], sign * value, 1e-6, reference.x[j]));
    });
  }
});

describe('penalised fits against scikit-learn 1.2.1', () => {
  interface Row {
    readonly id: string;
    readonly lambda: number;
    readonly C: number;
    readonly solver: string;
    readonly intercept: number;
    readonly l1_ratio: number | null;
    readonly max_abs_diff: number;
  }
  // Source: expected/sklearn_crosscheck.json, generators/sklearn_crosscheck.py; C = 1/(lambda sum w).
  const { rows } = expected<{ rows: Row[] }>('sklearn_crosscheck.json');
  it.each(rows)('$solver on $id at $lambda', (row) => {
    const reference = referenceFits.find((fit) => fit.id === row.id);
    if (!reference) throw new Error(row.id);
    const { problem, sign } = problemOf(reference);
    const total = problem.weights?.reduce((sum, w) => sum + w, 0) ?? problem.outcome.length;
    expectNear(1 / (row.lambda * total), row.C, 1e-12, 'C');
    const fit = fitAt(problem, row.lambda);
    const gap = Math.abs(sign * fit.intercept - row.intercept);
    // liblinear penalises the intercept, so it must not agree; the others are as good as the file says they are.
    if (row.solver === 'liblinear') expect(gap).toBeGreaterThan(1e-3);
    expect(gap).toBeLessThanOrEqual(row.max_abs_diff + 1e-6);
    if (row.l1_ratio !== null) expect(row.l1_ratio).toBe(reference.alpha);
  });
});

it('reads every figure of penalised_logistic_fits', () =>
  expectAllRead('penalised_logistic_fits.json', {
    'fits/*/lambda_path/*/max_abs_diff_glmnet_thresh1e26': 'how well the two programs behind the file agree with one another',
    'fits/*/lambda_path/*/max_abs_diff_glmnet_thresh1e14': 'how far glmnet is off at a looser threshold',
    ...Object.fromEntries(
      referenceFits.flatMap(({ id }, place) =>
        needOtherData.includes(id) ? [[`fits/${place}/**`, 'its data may not be passed on']] : [],
      ),
    ),
  }));

it('reads every figure of sklearn_crosscheck', () =>
  expectAllRead('sklearn_crosscheck.json', { 'rows/*/n_iter': "the other program's iterations" }));
