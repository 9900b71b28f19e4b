import { describe, expect, it } from 'vitest';
import { NumericError } from '../errors';
import { randomProblem } from '../testing/problems';
import { crossValidate, summarise } from './folds';
import { deviance, probabilityOfBad, probabilityOfGood } from './loss';
import { linearPredictor } from './optimality';
import { automaticGrid, fitAt, fitPath, largestLambda, nullDeviance } from './path';
import type { FitProblem } from './problem';

const lasso = { mixing: 1, standardize: true };
const problem = randomProblem(5, 400, 6, lasso);

function codeOf(act: () => unknown): { code: string; where: object } {
  try {
    act();
  } catch (error) {
    if (error instanceof NumericError) return { code: error.code, where: error.where };
    throw error;
  }
  throw new Error('nothing was thrown');
}

describe('fitPath', () => {
  it('walks a logarithmic grid from the largest lambda and reports progress', () => {
    const seen: number[] = [];
    const path = fitPath(
      problem,
      { count: 10, smallestRatio: 1e-3, earlyStop: false },
      { onFit: (_, index, count) => seen.push(index / count) },
    );
    expect(path.fits).toHaveLength(10);
    expect(seen).toHaveLength(10);
    expect(path.fits[0].lambda).toBe(path.largestLambda);
    expect(path.fits[9].lambda / path.largestLambda).toBeCloseTo(1e-3, 12);
    expect(path.stoppedEarly).toBe(false);
    expect(path.fits.every((fit) => fit.status === 'converged' && fit.optimalityResidual <= 1e-9)).toBe(true);
    expect(path.fits[0].coefficients.every((b) => b === 0)).toBe(true);
  });

  it('stops an automatic grid when nothing is gained, from the fifth value on, and never a stated one', () => {
    const path = fitPath(problem, { count: 100, smallestRatio: 1e-4, earlyStop: true });
    expect([path.stoppedEarly, path.stoppedBecause]).toEqual([true, 'little-gain']);
    expect(path.fits.length).toBeGreaterThanOrEqual(5);
    const [before, last] = path.fits.slice(-2);
    expect((before.deviance - last.deviance) / path.nullDeviance).toBeLessThan(1e-5);
    const stated = fitPath(problem, { lambdas: automaticGrid(path.largestLambda, 100, 1e-4) });
    expect(stated.fits).toHaveLength(100);
    expect([stated.stoppedEarly, 'stoppedBecause' in stated]).toEqual([false, false]);
    // Where the rule would stop at the last value of the grid, the grid has come to its end by itself.
    const same = fitPath(problem, { count: 100, smallestRatio: 1e-4, earlyStop: false });
    expect([same.fits.length, same.stoppedEarly]).toEqual([100, false]);
  });

  it('keeps the order of a stated grid and reaches the same optimum from any side', () => {
    const up = fitPath(problem, { lambdas: [0.001, 0.01, 0.05] }, { tolerance: 1e-11 });
    const down = fitPath(problem, { lambdas: [0.05, 0.01, 0.001] }, { tolerance: 1e-11 });
    expect(up.fits.map((fit) => fit.lambda)).toEqual([0.001, 0.01, 0.05]);
    up.fits.forEach((fit, k) => fit.coefficients.forEach((b, j) => expect(b).toBeCloseTo(down.fits[2 - k].coefficients[j], 8)));
  });

  it('gives the same numbers when run again', () => {
    const grid = { count: 20, smallestRatio: 1e-3, earlyStop: false };
    expect(fitPath(problem, grid)).toEqual(fitPath(problem, grid));
  });

  it('leaves out a column without variance', () => {
    const constant: FitProblem = { ...problem, columns: [new Float64Array(400).fill(0.1), ...problem.columns] };
    const fit = fitAt(constant, 0.01);
    expect(fit.coefficients[0]).toBe(0);
    expect(fit.coefficients.subarray(1)).toEqual(fitAt(problem, 0.01).coefficients);
  });

  it('fits an unpenalised column at every lambda', () => {
    const multipliers = Float64Array.of(0, 1, 1, 1, 1, 1);
    const own: FitProblem = { ...problem, penalty: { ...lasso, multipliers } };
    const fit = fitAt(own, largestLambda(own));
    expect(fit.coefficients[0]).not.toBe(0);
    expect(fit.coefficients.subarray(1).every((b) => b === 0)).toBe(true);
    const alone = fitAt({ ...problem, columns: [problem.columns[0]] }, 0);
    expect(fit.coefficients[0]).toBeCloseTo(alone.coefficients[0], 8);
  });

  it('an offset equal to the fit leaves nothing to fit', () => {
    const fit = fitAt(problem, 0, { tolerance: 1e-12 });
    const offset = linearPredictor(problem.columns, fit.intercept, fit.coefficients);
    const again = fitAt({ ...problem, offset }, 0, { tolerance: 1e-12 });
    expect(Math.abs(again.intercept)).toBeLessThan(1e-9);
    again.coefficients.forEach((b) => expect(Math.abs(b)).toBeLessThan(1e-9));
    expect(again.deviance).toBeCloseTo(fit.deviance, 8);
    expect(nullDeviance({ ...problem, offset })).toBeCloseTo(fit.deviance, 8);
  });
});

describe('what data can do to a fit is a status', () => {
  const rows = (x: number[], y: number[], penalty = lasso): FitProblem => ({
    columns: [Float64Array.from(x)],
    outcome: Uint8Array.from(y),
    penalty,
  });

  it('complete and quasi-complete separation without a penalty', () => {
    expect(fitAt(rows([-2, -1, 1, 2], [0, 0, 1, 1]), 0).status).toBe('separation');
    expect(fitAt(rows([-2, 0, 0, 2], [0, 0, 1, 1]), 0).status).toBe('separation');
    expect(fitAt(rows([-2, -1, 1, 2], [0, 0, 1, 1]), 0.01).status).toBe('converged');
  });

  it('a bin without bads as an unpenalised indicator', () => {
    const x = [...Array.from({ length: 50 }, () => 0), ...Array.from({ length: 5 }, () => 1)];
    const y = x.map((v, i) => (v === 1 || i % 3 > 0 ? 1 : 0));
    expect(fitAt(rows(x, y), 0).status).toBe('separation');
    const limited = { ...lasso, upper: Float64Array.of(2) };
    const fit = fitAt(rows(x, y, limited), 0);
    expect([fit.status, fit.coefficients[0]]).toEqual(['converged', 2]);
  });

  it('a reference bin without bads: the indicators of all other bins and the intercept run apart', () => {
    const bin = Array.from({ length: 2000 }, (_, row) => row % 4);
    const outcome = Uint8Array.from(bin, (b, row) => (b === 0 || row % 7 > b ? 1 : 0));
    const indicator = (value: number): Float64Array => Float64Array.from(bin, (b) => (b === value ? 1 : 0));
    const noise = Float64Array.from(bin, (_, row) => Math.sin(row));
    const free = { ...lasso, multipliers: Float64Array.of(0, 0, 0, 1) };
    const problem: FitProblem = { columns: [indicator(1), indicator(2), indicator(3), noise], outcome, penalty: free };
    for (const lambda of [0, 0.001, 0.1]) expect(fitAt(problem, lambda).status).toBe('separation');
    // With one indicator left out the bins share an intercept that is finite.
    expect(
      fitAt(
        { ...problem, columns: problem.columns.slice(1), penalty: { ...lasso, multipliers: Float64Array.of(0, 0, 1) } },
        0.001,
      ).status,
    ).toBe('converged');
  });

  it('a strong but finite predictor is not called separated', () => {
    const x = Array.from({ length: 200 }, (_, i) => i - 99.5);
    const y = x.map((v, i) => (i === 98 ? 1 : i === 101 ? 0 : v > 0 ? 1 : 0));
    const fit = fitAt(rows(x, y), 0);
    expect(fit.status).toBe('converged');
    expect(Math.abs(fit.coefficients[0])).toBeGreaterThan(0.5);
  });

  it('an iteration limit', () => {
    const fit = fitAt(problem, 1e-4, { mostIterations: 1, tolerance: 1e-14 });
    expect(fit.status).toBe('iteration-limit');
    expect(fit.optimalityResidual).toBeGreaterThan(1e-14);
  });
});

describe('bad arguments are refused with their place', () => {
  const change =
    (over: Partial<FitProblem>): (() => unknown) =>
    () =>
      fitAt({ ...problem, ...over }, 0.1);
  it('NaN in a column, an offset or a weight', () => {
    const broken = problem.columns.map((column, j) => (j === 2 ? column.map((x, i) => (i === 17 ? NaN : x)) : column));
    expect(codeOf(change({ columns: broken }))).toEqual({
      code: 'not-a-number',
      where: { name: 'columns', column: 2, index: 17 },
    });
    expect(codeOf(change({ offset: new Float64Array(400).fill(Infinity) })).code).toBe('not-a-number');
    expect(codeOf(change({ weights: new Float64Array(400).fill(-1) })).code).toBe('out-of-range');
    expect(codeOf(change({ weights: new Float64Array(400) })).code).toBe('out-of-range');
  });
  it('lengths, classes, settings', () => {
    expect(codeOf(change({ outcome: new Uint8Array(399).fill(1) })).code).toBe('length-mismatch');
    expect(codeOf(change({ outcome: new Uint8Array(400).fill(1) })).code).toBe('one-class');
    expect(codeOf(change({ outcome: new Uint8Array(400).fill(2) })).code).toBe('out-of-range');
    expect(codeOf(change({ columns: [], outcome: new Uint8Array(0) })).code).toBe('no-rows');
    expect(codeOf(change({ penalty: { mixing: 1.5, standardize: true } })).code).toBe('out-of-range');
    expect(codeOf(change({ penalty: { ...lasso, lower: new Float64Array(6).fill(0.1) } })).code).toBe('out-of-range');
    expect(codeOf(change({ penalty: { ...lasso, multipliers: new Float64Array(6).fill(-1) } })).code).toBe('out-of-range');
    expect(codeOf(() => fitAt(problem, -1)).code).toBe('out-of-range');
    expect(codeOf(() => fitPath({ ...problem, columns: [] }, { count: 5, smallestRatio: 0.1, earlyStop: false })).code).toBe(
      'out-of-range',
    );
  });
});

describe('crossValidate', () => {
  const folds = Uint8Array.from({ length: 400 }, (_, i) => (i % 5) + 1);

  it('is the same as fitting each part by hand', () => {
    const lambdas = [0.05, 0.01];
    const result = crossValidate(problem, folds, lambdas, { tolerance: 1e-10 });
    lambdas.forEach((lambda, k) => {
      const training = Array.from(folds.keys()).filter((i) => folds[i] !== 2);
      const held = Array.from(folds.keys()).filter((i) => folds[i] === 2);
      const take = (rows: number[]): FitProblem => ({
        ...problem,
        columns: problem.columns.map((column) => Float64Array.from(rows, (i) => column[i])),
        outcome: Uint8Array.from(rows, (i) => problem.outcome[i]),
      });
      const fit = fitAt(take(training), lambda, { tolerance: 1e-10 });
      const part = take(held);
      const wanted = deviance(part.outcome, linearPredictor(part.columns, fit.intercept, fit.coefficients)) / held.length;
      expect(result.folds[1].deviance[k]).toBeCloseTo(wanted, 8);
    });
  });

  it('takes columns per fold and reports each fold', () => {
    const seen: number[] = [];
    const result = crossValidate(problem, folds, [0.02], {
      columnsForFold: (fold, training) => {
        expect(training.filter((t) => t === 0)).toHaveLength(80);
        return fold === 1 ? problem.columns.map((column) => column.map((x) => 2 * x)) : null;
      },
      onFold: (done) => seen.push(done),
    });
    expect(seen).toEqual([1, 2, 3, 4, 5]);
    // A column scaled by 2 is the same column once standardised.
    expect(result.mean[0]).toBeCloseTo(crossValidate(problem, folds, [0.02]).mean[0], 8);
  });

  it('names a fold without rows, and one whose training part has one class', () => {
    const gap = folds.map((fold) => (fold === 3 ? 4 : fold));
    expect(codeOf(() => crossValidate(problem, gap, [0.1]))).toEqual({ code: 'no-rows', where: { name: 'folds', fold: 3 } });
    const split = Uint8Array.from(problem.outcome, (y) => y + 1);
    expect(codeOf(() => crossValidate(problem, split, [0.1]))).toEqual({
      code: 'one-class',
      where: { name: 'outcome', fold: 1 },
    });
  });

  it('chooses by the rules: ties go to the largest lambda, the end of the grid is reported', () => {
    const fold = (number: number, values: number[]) => ({ fold: number, weight: 1, deviance: values });
    const tied = summarise([0.4, 0.3, 0.2, 0.1], [fold(1, [3, 1, 1, 2]), fold(2, [3, 1.2, 1.2, 2])]);
    expect([tied.minimum, tied.oneStandardError, tied.atGridEnd]).toEqual([1, 1, false]);
    const falling = summarise([0.3, 0.2, 0.1], [fold(1, [1.1, 1.05, 1]), fold(2, [1.2, 1.15, 1.1])]);
    expect([falling.minimum, falling.oneStandardError, falling.atGridEnd]).toEqual([2, 1, true]);
    expect(falling.standardError[2]).toBeCloseTo(0.05, 12);
  });
});

describe('the loss', () => {
  it('keeps its digits in both tails', () => {
    expect(probabilityOfBad(800)).toBe(0);
    expect(probabilityOfGood(-700)).toBeGreaterThan(0);
    expect(probabilityOfBad(40)).toBeCloseTo(Math.exp(-40), 30);
    expect(deviance(Uint8Array.of(1), Float64Array.of(40))).toBeCloseTo(2 * Math.exp(-40), 30);
    expect(deviance(Uint8Array.of(0), Float64Array.of(1000))).toBe(2000);
  });
});
