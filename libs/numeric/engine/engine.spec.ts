import { describe, expect, it } from 'vitest';
import { NumericError } from '../errors';
import { crossValidate } from '../penalised/folds';
import { optimalityResidual } from '../penalised/optimality';
import { fitAt, fitPath } from '../penalised/path';
import type { Fit, FitProblem, Grid, Penalty } from '../penalised/problem';
import { Generator } from '../random/generator';
import { resampleFits } from '../resampling/stability';
import { randomProblem } from '../testing/problems';
import { codedColumns } from './coded-columns';
import { Engine } from './engine';
import { fastCrossValidation, fastFit, fastPath, fastResamples } from './dispatch';

const ROWS = 6000;
const automatic: Grid = { count: 40, smallestRatio: 1e-3, earlyStop: true };
const foldsOf = (rows: number, count: number): Uint8Array =>
  Uint8Array.from({ length: rows }, (_, i) => ((i * 7919) % count) + 1);

/** The problem with weights of 0 to 2, an offset, or a linear column where asked. */
function problemWith(penalty: Penalty, more: { weights?: boolean; offset?: boolean; linear?: boolean } = {}): FitProblem {
  const random = new Generator(17);
  const problem = randomProblem(12, ROWS, 8, penalty);
  const columns = more.linear
    ? [...problem.columns.slice(0, 7), Float64Array.from(problem.outcome, (y) => 3 + 0.2 * y + random.normal())]
    : problem.columns;
  return {
    ...problem,
    columns,
    ...(more.weights ? { weights: Float64Array.from(problem.outcome, () => Math.round(4 * random.uniform()) / 2) } : {}),
    ...(more.offset ? { offset: Float64Array.from(problem.outcome, () => 0.5 * random.normal()) } : {}),
  };
}

/** Both at a residual of 1e-10: what is left is that residual over the smallest curvature, some 1e-9. */
function expectSamePath(problem: FitProblem, grid: Grid): void {
  const engine = fastPath(problem, grid, { tolerance: 1e-10 });
  const oracle = fitPath(problem, grid, { tolerance: 1e-10 });
  expect([engine.solver, engine.reason]).toEqual(['engine', null]);
  expect(engine.fits).toHaveLength(oracle.fits.length);
  expect([engine.stoppedEarly, engine.stoppedBecause]).toEqual([oracle.stoppedEarly, oracle.stoppedBecause]);
  expect(Math.abs(engine.largestLambda / oracle.largestLambda - 1)).toBeLessThan(1e-10);
  expect(Math.abs(engine.nullDeviance / oracle.nullDeviance - 1)).toBeLessThan(1e-12);
  engine.fits.forEach((fit, k) => expectSameFit(problem, fit, oracle.fits[k]));
}

function expectSameFit(problem: FitProblem, fit: Fit, wanted: Fit): void {
  expect(fit.status).toBe('converged');
  expect(Math.abs(fit.lambda / wanted.lambda - 1)).toBeLessThan(1e-10);
  expect(Math.abs(fit.intercept - wanted.intercept)).toBeLessThan(2e-8);
  fit.coefficients.forEach((b, j) => expect(Math.abs(b - wanted.coefficients[j])).toBeLessThan(2e-8));
  expect(Math.abs(fit.objective / wanted.objective - 1)).toBeLessThan(1e-12);
  expect(Math.abs(fit.deviance / wanted.deviance - 1)).toBeLessThan(1e-9);
  // The residual that is reported is the one that the definition gives for the fit.
  expect(fit.optimalityResidual).toBeLessThanOrEqual(1e-10);
  expect(optimalityResidual(problem, fit)).toBeLessThan(1.5e-10);
}

describe('the engine finds the path of the oracle', () => {
  const lasso = { mixing: 1, standardize: true };
  it('lasso', () => expectSamePath(problemWith(lasso), automatic));
  it('ridge', () => expectSamePath(problemWith({ mixing: 0, standardize: true }), automatic));
  it('elastic net, not standardised', () => expectSamePath(problemWith({ mixing: 0.4, standardize: false }), automatic));
  it('weights, some of them 0', () => expectSamePath(problemWith(lasso, { weights: true }), automatic));
  it('an offset', () => expectSamePath(problemWith(lasso, { offset: true }), automatic));
  it('a column used by its value', () => expectSamePath(problemWith(lasso, { linear: true, weights: true }), automatic));
  it('limits', () =>
    expectSamePath(
      problemWith({ ...lasso, lower: new Float64Array(8), upper: Float64Array.of(0.2, 0.2, 9, 9, 9, 9, 0, 0.05) }),
      automatic,
    ));
  it('multipliers, one of them 0', () =>
    expectSamePath(problemWith({ ...lasso, multipliers: Float64Array.of(0, 1, 2, 1, 0.5, 1, 1, 3) }), automatic));
  it('a stated grid that neither falls nor starts at the largest lambda', () =>
    expectSamePath(problemWith(lasso), { lambdas: [0.01, 0.0005, 0.02, 0.02, 0.9] }));
  it('a grid that stops early, and one that does not', () => {
    const problem = problemWith(lasso);
    const stopped = fastPath(problem, { count: 100, smallestRatio: 1e-4, earlyStop: true });
    expect(stopped.stoppedEarly).toBe(true);
    expectSamePath(problem, { count: 100, smallestRatio: 1e-4, earlyStop: true });
    expect(fastPath(problem, { count: 100, smallestRatio: 1e-4, earlyStop: false }).fits).toHaveLength(100);
  });
  it('indicators of all bins, exactly collinear', () => {
    const { columns, outcome } = randomProblem(12, ROWS, 3, lasso);
    const indicators = columns.flatMap((column) =>
      [...new Set(column)].map((value) => Float64Array.from(column, (own) => (own === value ? 1 : 0))),
    );
    const problem = { columns: indicators, outcome, penalty: lasso };
    // With the lasso, coefficients of collinear columns are not unique where bins tie; objective and residual are.
    const engine = fastPath(problem, automatic, { tolerance: 1e-9 });
    const oracle = fitPath(problem, automatic, { tolerance: 1e-9 });
    expect(engine.reason).toBeNull();
    engine.fits.forEach((fit, k) => {
      expect(optimalityResidual(problem, fit)).toBeLessThan(1.5e-9);
      expect(Math.abs(fit.objective - oracle.fits[k].objective)).toBeLessThan(1e-11);
    });
    expectSamePath({ ...problem, penalty: { mixing: 0.5, standardize: true } }, automatic);
  });
  it('columns without variance, and one that all rows with weight share', () => {
    const problem = problemWith(lasso, { weights: true });
    const columns = [...problem.columns];
    columns[2] = new Float64Array(ROWS).fill(0.7);
    columns[3] = Float64Array.from(problem.weights ?? [], (w, i) => (w > 0 ? 1 : i));
    expectSamePath({ ...problem, columns }, automatic);
  });
});

describe('columns on scales of 1e-300 and 1e300', () => {
  it.each([1e-300, 1e-160, 1e160, 1e300])('times %d: the same fit, its coefficients divided by it', (scale) => {
    const penalty = { mixing: 0.7, standardize: true };
    const problem = problemWith(penalty, { linear: true });
    const columns = problem.columns.map((column, j) => (j === 0 || j === 7 ? column.map((value) => value * scale) : column));
    const wanted = fitAt(problem, 0.004, { tolerance: 1e-10 });
    const fit = fastFit({ ...problem, columns }, 0.004, { tolerance: 1e-10 });
    expect([fit.solver, fit.status]).toEqual(['engine', 'converged']);
    expect(wanted.coefficients[0] * wanted.coefficients[7]).not.toBe(0);
    fit.coefficients.forEach((b, j) =>
      expect(Math.abs((j === 0 || j === 7 ? b * scale : b) - wanted.coefficients[j])).toBeLessThan(2e-8),
    );
  });
});

describe('the engine fits one lambda', () => {
  const problem = problemWith({ mixing: 1, standardize: true });
  it('cold and warm', () => {
    const wanted = fitAt(problem, 0.004, { tolerance: 1e-10 });
    expectSameFit(problem, fastFit(problem, 0.004, { tolerance: 1e-10 }), wanted);
    const start = fitAt(problem, 0.006);
    expectSameFit(problem, fastFit(problem, 0.004, { tolerance: 1e-10, start }), wanted);
  });
});

describe('the engine fits again after a bin has changed', () => {
  it('as if the column had always been so', () => {
    const problem = problemWith({ mixing: 1, standardize: true }, { weights: true, linear: true });
    const columns = codedColumns(problem.columns);
    const engine = new Engine({ ...problem, columns });
    const start = engine.fitAt(0.004);
    const [, second] = columns;
    if (second.kind !== 'coded') throw new Error('The second column has codes.');
    const codes = second.codes.map((code, i) => (code === 0 && i % 2 === 0 ? second.values.length : code));
    const values = Float64Array.of(...second.values, 1.3);
    const again = engine.withColumn(1, { kind: 'coded', codes, values }).fitAt(0.004, { start, tolerance: 1e-10 });
    const changed = problem.columns.map((column, j) => (j === 1 ? Float64Array.from(codes, (code) => values[code]) : column));
    expectSameFit({ ...problem, columns: changed }, again, fitAt({ ...problem, columns: changed }, 0.004, { tolerance: 1e-10 }));
  });
});

describe('the engine cross-validates as the oracle does', () => {
  const check = (
    problem: FitProblem,
    folds: Uint8Array,
    columnsForFold?: (fold: number, training: Uint8Array) => Float64Array[],
  ): void => {
    const { fits } = fitPath(problem, automatic);
    const lambdas = fits.map(({ lambda }) => lambda);
    const more = columnsForFold ? { columnsForFold } : {};
    const engine = fastCrossValidation(problem, folds, lambdas, more);
    const guided = fastCrossValidation(problem, folds, lambdas, { ...more, path: fits });
    const oracle = crossValidate(problem, folds, lambdas, more);
    for (const result of [engine, guided]) {
      expect([result.solver, result.reason]).toEqual(['engine', null]);
      expect(result.converged).toBe(true);
      expect(result.optimalityResidual).toBeLessThanOrEqual(1e-6);
      expect([result.minimum, result.oneStandardError, result.atGridEnd]).toEqual([
        oracle.minimum,
        oracle.oneStandardError,
        oracle.atGridEnd,
      ]);
      result.folds.forEach((fold, f) => {
        expect(fold.weight).toBeCloseTo(oracle.folds[f].weight, 9);
        fold.deviance.forEach((value, k) => expect(Math.abs(value - oracle.folds[f].deviance[k])).toBeLessThan(1e-6));
      });
    }
  };
  const lasso = { mixing: 1, standardize: true };
  it('lasso', () => check(problemWith(lasso), foldsOf(ROWS, 10)));
  it('ridge', () => check(problemWith({ mixing: 0, standardize: true }), foldsOf(ROWS, 5)));
  it('elastic net with weights, offset, a linear column', () =>
    check(problemWith({ mixing: 0.5, standardize: true }, { weights: true, offset: true, linear: true }), foldsOf(ROWS, 4)));
  it('limits and multipliers', () =>
    check(
      problemWith({ ...lasso, lower: new Float64Array(8), multipliers: Float64Array.of(0, 1, 2, 1, 0.5, 1, 1, 3) }),
      foldsOf(ROWS, 5),
    ));
  it('more folds than one batch has lanes', () => check(problemWith(lasso), foldsOf(ROWS, 21)));
  /** Below 40 rows for each column a fold has a curvature of its own; above, and below 5,000 rows, that of all rows. */
  for (const [rows, count] of [[900, 30], [2000, 20]] as const) {
    it(`${rows} rows of ${count} columns`, () => {
      for (const [mixing, folds] of [[1, 10], [0.5, 5], [0, 4]] as const)
        check(randomProblem(12, rows, count, { mixing, standardize: true }), foldsOf(rows, folds));
    });
    it(`${rows} rows of ${count} columns with weights and a linear column`, () => {
      const random = new Generator(5);
      const problem = randomProblem(13, rows, count, lasso);
      const linear = Float64Array.from(problem.outcome, (y) => 3 + 0.2 * y + random.normal());
      const weights = Float64Array.from(problem.outcome, () => Math.round(4 * random.uniform()) / 2);
      check({ ...problem, columns: [...problem.columns.slice(1), linear], weights }, foldsOf(rows, 6));
    });
  } // prettier-ignore
  it('a rare bin that a fold loses', () => {
    const problem = problemWith(lasso);
    const folds = foldsOf(ROWS, 5);
    const rare = Float64Array.from(folds, (fold, i) => (fold === 3 && i % 50 < 10 ? 1 : 0));
    expect(rare.includes(1)).toBe(true);
    check({ ...problem, columns: [...problem.columns.slice(0, 7), rare] }, folds);
  });
  it('columns from each training part', () => {
    const problem = problemWith(lasso);
    const folds = foldsOf(ROWS, 5);
    check(problem, folds, (fold) =>
      problem.columns.map((column, j) => column.map((value) => value + 0.02 * fold * Math.sin(j + 3 * value))),
    );
  });
  it('bins that are equal in all rows and differ in a fold', () => {
    const problem = problemWith(lasso);
    const folds = foldsOf(ROWS, 3);
    const merged = problem.columns.map((column) => column.map((value) => Math.max(0, value)));
    check({ ...problem, columns: merged }, folds, (fold) =>
      problem.columns.map((column, j) => (fold === 2 && j === 1 ? column.map((value) => Math.max(-0.3, value)) : merged[j])),
    );
  });
});

describe('the engine fits resamples as the oracle does', () => {
  for (const more of [{}, { weights: true }, { linear: true }]) {
    it(JSON.stringify(more), () => {
      const problem = problemWith({ mixing: 1, standardize: true }, more);
      const options = { seed: 3, first: 2, count: 19 };
      const engine = fastResamples(problem, 0.004, options);
      const oracle = resampleFits(problem, 0.004, { ...options, tolerance: 1e-9 });
      expect([engine.solver, engine.reason]).toEqual(['engine', null]);
      expect(engine.draws.map(({ resample }) => resample)).toEqual(oracle.map(({ resample }) => resample));
      engine.draws.forEach((draw, b) => {
        expect(draw.converged).toBe(true);
        // A residual of 1e-6 over a curvature of some 0.05.
        expect(Math.abs(draw.intercept - oracle[b].intercept)).toBeLessThan(4e-5);
        draw.coefficients.forEach((value, j) => expect(Math.abs(value - oracle[b].coefficients[j])).toBeLessThan(4e-5));
      });
    });
  }
});

describe('what the engine leaves to the oracle, it says', () => {
  const lasso = { mixing: 1, standardize: true };
  it('few rows', () => {
    const result = fastPath(randomProblem(1, 300, 3, lasso), automatic);
    expect([result.solver, result.reason]).toEqual(['oracle', 'fewer than 500 rows']);
  });
  it('goods and bads that an unpenalised column separates', () => {
    const problem = problemWith({ ...lasso, multipliers: Float64Array.of(0, 1, 1, 1, 1, 1, 1, 1) });
    const columns = [Float64Array.from(problem.outcome), ...problem.columns.slice(1)];
    const grid = { lambdas: [0.02] };
    const result = fastPath({ ...problem, columns }, grid);
    expect([result.solver, result.reason]).toEqual(['oracle', 'goods and bads are separated']);
    expect(result.fits[0].status).toBe('separation');
    const folds = foldsOf(ROWS, 3);
    expect(fastCrossValidation({ ...problem, columns }, folds, [0.02]).converged).toBe(false);
  });
  it('fits without penalty', () => {
    const problem = problemWith(lasso);
    expect(fastFit(problem, 0)).toMatchObject({ solver: 'oracle', reason: 'a fit without penalty', status: 'converged' });
  });
  it('and refuses what the oracle refuses', () => {
    const problem = problemWith(lasso);
    const folds = foldsOf(ROWS, 3);
    expect(() => fastPath({ ...problem, columns: [new Float64Array(3)] }, automatic)).toThrow(NumericError);
    folds[5] = 0;
    expect(() => fastCrossValidation(problem, folds, [0.1])).toThrow(/fold 0/);
    const oneClass = Uint8Array.from(problem.outcome, (y) => 2 - y);
    expect(() => fastCrossValidation(problem, oneClass, [0.1])).toThrow(/Fold 1: There is no/);
  });
});
