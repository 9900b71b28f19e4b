import { describe, expect, it } from 'vitest';
import { fitAt } from '../penalised/path';
import type { FitProblem } from '../penalised/problem';
import { randomProblem } from '../testing/problems';
import { conditionIndex, correlation, standardErrors, varianceInflation } from './collinearity';
import { fitForeignChallenger } from './foreign-challenger';

const problem = randomProblem(12, 300, 4, { mixing: 1, standardize: true });

describe('collinearity', () => {
  it('correlation is symmetric, 1 with itself and blind to scale', () => {
    const own = correlation(problem.columns);
    const scaled = correlation(problem.columns.map((column, j) => column.map((x) => (j + 2) * x - 7)));
    own.forEach((row, j) =>
      row.forEach((value, k) => {
        expect(value).toBeCloseTo(own[k][j], 14);
        expect(scaled[j][k]).toBeCloseTo(value, 12);
      }),
    );
    expect(own[2][2]).toBe(1);
  });

  it('inflation is 1/(1 - R squared): infinite for exact collinearity, not a number without variance', () => {
    const [a, b] = problem.columns;
    const sum = a.map((x, i) => x + b[i]);
    const constant = new Float64Array(300).fill(3);
    const inflation = varianceInflation([a, b, sum, problem.columns[2], constant]);
    expect([...inflation.slice(0, 3)]).toEqual([Infinity, Infinity, Infinity]);
    expect(inflation[3]).toBeGreaterThanOrEqual(1);
    expect(inflation[3]).toBeLessThan(3);
    expect(inflation[4]).toBeNaN();
    expect(conditionIndex([a, b, sum]).largest).toBe(Infinity);
    expect(conditionIndex([a]).indices).toEqual([1]);
  });

  it('weights are repeated rows', () => {
    const weights = Float64Array.from({ length: 300 }, (_, i) => i % 3);
    const rows = Array.from(weights).flatMap((w, i) => Array.from({ length: w }, () => i));
    const repeated = problem.columns.map((column) => Float64Array.from(rows, (i) => column[i]));
    varianceInflation(problem.columns, weights).forEach((value, j) =>
      expect(value).toBeCloseTo(varianceInflation(repeated)[j], 10),
    );
  });

  it('standard errors of a saturated fit are those of log odds, and collinear columns have none', () => {
    // 2 x 2 table 40/10 and 20/30: the variance of a log odds ratio is the sum of reciprocal counts.
    const table: FitProblem = {
      columns: [Float64Array.of(1, 1, 0, 0)],
      outcome: Uint8Array.of(1, 0, 1, 0),
      weights: Float64Array.of(40, 10, 20, 30),
      penalty: { mixing: 1, standardize: true },
    };
    const errors = standardErrors(table, fitAt(table, 0, { tolerance: 1e-13 }));
    expect(errors.coefficients[0]).toBeCloseTo(Math.sqrt(1 / 40 + 1 / 10 + 1 / 20 + 1 / 30), 9);
    expect(errors.intercept).toBeCloseTo(Math.sqrt(1 / 20 + 1 / 30), 9);
    const twice: FitProblem = { ...problem, columns: [problem.columns[0], problem.columns[0]] };
    expect(() => standardErrors(twice, { intercept: 0, coefficients: Float64Array.of(0, 0) })).toThrow('collinear');
  });
});

describe('fitForeignChallenger', () => {
  it('agrees with the unpenalised fit to about 1e-3', () => {
    const foreign = fitForeignChallenger(problem, { steps: 400 });
    const own = fitAt(problem, 0);
    expect(Math.abs(foreign.intercept - own.intercept)).toBeLessThan(1e-3);
    own.coefficients.forEach((b, j) => expect(Math.abs(foreign.coefficients[j] - b)).toBeLessThan(1e-3));
  });

  it('refuses what the library cannot do', () => {
    const many = randomProblem(1, 5001, 1, problem.penalty);
    expect(() => fitForeignChallenger(many)).toThrow('5001 rows');
    expect(() =>
      fitForeignChallenger({ ...problem, weights: Float64Array.from({ length: 300 }, (_, i) => 1 + (i % 2)) }),
    ).toThrow('weights');
    expect(() => fitForeignChallenger({ ...problem, offset: new Float64Array(300) })).toThrow('offset');
  });
});
