import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { optimalityResidual } from '../penalised/optimality';
import { fitPath } from '../penalised/path';
import type { FitProblem } from '../penalised/problem';
import { Generator } from '../random/generator';
import { problems, randomProblem, seeds } from '../testing/problems';
import { fastCrossValidation, fastFit, fastPath, fastResamples } from './dispatch';

const lasso = { mixing: 1, standardize: true };
const grid = { count: 12, smallestRatio: 1e-2, earlyStop: false };
/** Whatever its size, by the engine. */
const always = { engineFrom: 0, tolerance: 1e-10 };

function expectOptimal(problem: FitProblem): void {
  const found = fastPath(problem, grid, always);
  const wanted = fitPath(problem, grid, { tolerance: 1e-10 });
  expect([found.solver, found.reason]).toEqual(['engine', null]);
  found.fits.forEach((fit, k) => {
    expect(fit.status).toBe('converged');
    expect(optimalityResidual(problem, fit)).toBeLessThan(1.5e-10);
    expect(Math.abs(fit.objective / wanted.fits[k].objective - 1)).toBeLessThan(1e-10);
  });
}

describe('the engine on drawn problems', () => {
  it('reaches the optimum of the oracle', () => {
    fc.assert(
      fc.property(problems, (problem) => expectOptimal(problem)),
      { numRuns: 40 },
    );
  });

  it('does so whatever the order of rows and columns', () => {
    fc.assert(
      fc.property(problems, seeds, (problem, seed) => {
        const random = new Generator(seed);
        const drawn = (length: number): number[] =>
          Array.from({ length }, (_, i) => ({ i, key: random.uniform() }))
            .sort((a, b) => a.key - b.key)
            .map(({ i }) => i);
        const rows = drawn(problem.outcome.length);
        const columns = drawn(problem.columns.length);
        const turned: FitProblem = {
          ...problem,
          columns: columns.map((j) => Float64Array.from(rows, (i) => problem.columns[j][i])),
          outcome: Uint8Array.from(rows, (i) => problem.outcome[i]),
        };
        const fit = fastFit(problem, 0.01, always);
        const other = fastFit(turned, 0.01, always);
        expect(Math.abs(fit.intercept - other.intercept)).toBeLessThan(1e-6);
        columns.forEach((j, k) => expect(Math.abs(fit.coefficients[j] - other.coefficients[k])).toBeLessThan(1e-6));
      }),
      { numRuns: 30 },
    );
  });

  it.each([
    ['fewer rows than columns', randomProblem(3, 40, 60, lasso)],
    ['one column', randomProblem(4, 600, 1, lasso)],
    [
      'one bad',
      ((): FitProblem => ({
        ...randomProblem(5, 600, 4, lasso),
        outcome: Uint8Array.from({ length: 600 }, (_, i) => (i === 7 ? 0 : 1)),
      }))(),
    ],
  ])('%s', (_what, problem) => expectOptimal(problem));

  it('predicts the same for all where nothing enters', () => {
    const problem = randomProblem(6, 600, 4, lasso);
    const { largestLambda } = fastPath(problem, grid, always);
    const fit = fastFit(problem, 1.01 * largestLambda, always);
    const goods = problem.outcome.reduce((sum, y) => sum + y, 0);
    expect(Array.from(fit.coefficients)).toEqual([0, 0, 0, 0]);
    expect(Math.abs(fit.intercept - Math.log(goods / (600 - goods)))).toBeLessThan(1e-9);
  });
});

describe('what the engine gives up is the oracle’s, and said', () => {
  const problem = randomProblem(8, 700, 5, lasso);
  const folds = Uint8Array.from(problem.outcome, (_, i) => (i % 5) + 1);

  it('a residual below what doubles hold', () => {
    const fit = fastFit(problem, 0.01, { tolerance: 1e-20 });
    expect(fit).toMatchObject({ solver: 'oracle', status: 'iteration-limit' });
    expect(fit.reason).toMatch(/^the engine reached a residual of \d/);
    expect(fit.optimalityResidual).toBeLessThan(1e-12);
    const path = fastPath(problem, { lambdas: [0.02, 0.01] }, { tolerance: 1e-20 });
    expect(path.solver).toBe('oracle');
    expect(path.reason).toMatch(/^the engine reached a residual of .+ at lambda 0\.02$/);
  });

  it('columns of folds that codes cannot express', () => {
    const random = new Generator(2);
    const columnsForFold = (): Float64Array[] => problem.columns.map((column) => column.map((value) => value + random.uniform()));
    const found = fastCrossValidation(problem, folds, [0.02], { columnsForFold });
    expect([found.solver, found.reason]).toEqual(['oracle', 'columns of fold 1 cannot be coded']);
    expect(found.converged).toBe(true);
  });

  it('a residual that singles cannot prove, of resamples', () => {
    const found = fastResamples(problem, 0.02, { seed: 1, count: 2, tolerance: 1e-8 });
    expect([found.solver, found.reason]).toEqual(['oracle', 'a residual of 1e-8 is asked of resamples']);
  });
});
