import { describe, expect, it } from 'vitest';
import { fitAt, fitIndependently, fitPath, objective, optimalityResidual } from '@tallystone/numeric';
import { needOtherData, problemOf, referenceFits } from './penalised-fits';
import { expectNear, expected } from './reference-files';

const withData = referenceFits.filter((fit) => !fit.data.includes('saheart') && !fit.data.includes('uci'));

describe('penalised fits against glmnet 4.1-6 and an independent Newton solve', () => {
  it('covers every case whose data may be passed on', () => {
    expect(referenceFits.filter((fit) => !withData.includes(fit)).map((fit) => fit.id)).toEqual(needOtherData);
    expect(referenceFits).toHaveLength(34);
    expect(referenceFits.reduce((sum, fit) => sum + fit.lambda_path.length, 0)).toBe(219);
  });

  // Source: expected/penalised_logistic_fits.json (glmnet 4.1-6, Debian; agreement of its two methods 1.2e-11). A residual of 1e-9 bounds a
  // coefficient's error by about 1e-9 over the smallest curvature of the design, which is near 1e-3 here: hence 1e-6.
  for (const reference of withData) {
    it(reference.id, () => {
      const { problem, sign } = problemOf(reference);
      const path = fitPath(problem, { lambdas: reference.lambda_path.map(({ lambda }) => lambda) });
      expectNear(path.nullDeviance, reference.null_deviance, 1e-9 * reference.null_deviance, 'null deviance');
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
    else expect(gap).toBeLessThanOrEqual(row.max_abs_diff + 1e-6);
  });
});
