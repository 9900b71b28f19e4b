import { describe, expect, it } from 'vitest';
import { NumericError } from '../errors';
import { fitIndependently } from '../independent/proximal-gradient';
import { randomProblem } from '../testing/problems';
import { crossValidate } from './folds';
import { linearPredictor, objective, optimalityResidual } from './optimality';
import { fitAt, fitPath, largestLambda, nullDeviance } from './path';
import type { Fit, FitProblem, Penalty } from './problem';

const lasso: Penalty = { mixing: 1, standardize: true };
const problem = randomProblem(5, 200, 3, lasso);
const TIGHT = { tolerance: 1e-11 };

/** The problem with its first column changed. */
const withFirst = (change: (x: number, i: number) => number, own: FitProblem = problem): FitProblem => ({
  ...own,
  columns: own.columns.map((column, j) => (j === 0 ? column.map(change) : column)),
});
const small = (x: number[][], y: number[], penalty: Penalty = lasso): FitProblem => ({
  columns: x.map((column) => Float64Array.from(column)),
  outcome: Uint8Array.from(y),
  penalty,
});

function refusal(act: () => unknown): { code: string; where: object } {
  try {
    act();
  } catch (error) {
    if (error instanceof NumericError) return { code: error.code, where: error.where };
    throw error;
  }
  throw new Error('nothing was refused');
}

function expectWhole(fit: Fit): void {
  const { intercept, objective: value, deviance, optimalityResidual: residual, iterations } = fit;
  for (const number of [intercept, ...fit.coefficients, value, deviance, residual, iterations])
    expect(number).toSatisfy(Number.isFinite);
  expect(['converged', 'iteration-limit', 'separation']).toContain(fit.status);
}

describe('columns of extreme scale', () => {
  const scales = [1e-300, 1e-160, 1e-150, 1e150, 1e160, 1e300];

  it.each(scales)('standardised, times %d: the same fit, its coefficient divided', (scale) => {
    for (const mixing of [0, 0.5, 1]) {
      for (const lambda of [0, 0.01]) {
        const own: FitProblem = { ...problem, penalty: { mixing, standardize: true } };
        const plain = fitAt(own, lambda, TIGHT);
        const scaled = withFirst((x) => scale * x, own);
        const fit = fitAt(scaled, lambda, TIGHT);
        expectWhole(fit);
        expect(fit.status).toBe('converged');
        // Relative, because the coefficient itself is as extreme as the scale; 1e-8 as for ordinary columns.
        expect((fit.coefficients[0] * scale) / plain.coefficients[0]).toBeCloseTo(1, 8);
        expect(fit.coefficients[2]).toBeCloseTo(plain.coefficients[2], 8);
        expect(fit.objective).toBeCloseTo(plain.objective, 12);
        expect(optimalityResidual(scaled, fit)).toBeLessThanOrEqual(1e-9);
        expect(objective(scaled, fit)).toBeCloseTo(plain.objective, 12);
        const second = fitIndependently(scaled, lambda, { tolerance: 1e-9 });
        expect(second.status).toBe('converged');
        expect((second.coefficients[0] * scale) / plain.coefficients[0]).toBeCloseTo(1, 6);
      }
    }
  });

  it.each([1e-300, 1e-160])('unstandardised, times %d: the penalty leaves nothing of it, no penalty leaves all', (scale) => {
    for (const mixing of [0, 0.5, 1]) {
      const own: FitProblem = { ...problem, penalty: { mixing, standardize: false } };
      const scaled = withFirst((x) => scale * x, own);
      const fit = fitAt(scaled, 0.01, TIGHT);
      expect(fit.status).toBe('converged');
      expect(Math.abs(fit.coefficients[0])).toBeLessThan(1e-150);
      const without = fitAt({ ...own, columns: own.columns.slice(1), penalty: own.penalty }, 0.01, TIGHT);
      expect(fit.coefficients[1]).toBeCloseTo(without.coefficients[0], 8);
      expect(fitIndependently(scaled, 0.01).coefficients[1]).toBeCloseTo(without.coefficients[0], 6);
      const free = fitAt(scaled, 0, TIGHT);
      expect((free.coefficients[0] * scale) / fitAt(own, 0, TIGHT).coefficients[0]).toBeCloseTo(1, 8);
    }
  });

  it.each([1e150, 1e300])('unstandardised, times %d: the gradient cannot reach 1e-9, and the fit says so', (scale) => {
    const scaled = withFirst((x) => scale * x, { ...problem, penalty: { mixing: 1, standardize: false } });
    const fit = fitAt(scaled, 0.01);
    expectWhole(fit);
    expect(fit.status).toBe('iteration-limit');
    expect(fit.optimalityResidual).toBeGreaterThan(1e-9);
    // What is left is rounding: one unit of the last digit of a probability times the scale, over 200 rows.
    expect(fit.optimalityResidual).toBeLessThan(1e-14 * scale);
    const unpenalised = fitAt({ ...problem, penalty: { ...lasso, multipliers: Float64Array.of(0, 1, 1) } }, 0.01);
    expect((fit.coefficients[0] * scale) / unpenalised.coefficients[0]).toBeCloseTo(1, 1);
  });

  it('what no double can carry is refused with its column, at either end', () => {
    for (const scale of [1e-306, 1e-310, 5e-324, 1e305, 1e307]) {
      const scaled = withFirst((x) => scale * x);
      for (const act of [() => fitAt(scaled, 0.01), () => fitIndependently(scaled, 0.01), () => largestLambda(scaled)]) {
        expect(refusal(act)).toEqual({ code: 'out-of-range', where: { name: 'columns', column: 0 } });
      }
    }
  });

  it('a mean a thousand times the spread costs nothing; a million times, and the fit tells what it could not reach', () => {
    const plain = fitAt(problem, 0.01, TIGHT);
    const far = fitAt(
      withFirst((x) => x + 1e3),
      0.01,
    );
    expect(far.status).toBe('converged');
    const farther = fitAt(
      withFirst((x) => x + 1e6),
      0.01,
    );
    expectWhole(farther);
    for (const fit of [far, farther]) {
      fit.coefficients.forEach((b, j) => expect(Math.abs(b - plain.coefficients[j])).toBeLessThanOrEqual(1e-6));
      expect(fit.status === 'converged').toBe(fit.optimalityResidual <= 1e-9);
    }
  });
});

describe('extreme weights, offsets and penalties', () => {
  it('weights of any size are shares', () => {
    const plain = fitAt(problem, 0.01, TIGHT);
    for (const weight of [1e-300, 1e-10, 1e10, 1e300]) {
      const fit = fitAt({ ...problem, weights: new Float64Array(200).fill(weight) }, 0.01, TIGHT);
      expect(fit.status).toBe('converged');
      fit.coefficients.forEach((b, j) => expect(b).toBeCloseTo(plain.coefficients[j], 10));
      expect(fit.deviance / weight / plain.deviance).toBeCloseTo(1, 10);
    }
    expect(refusal(() => fitAt({ ...problem, weights: new Float64Array(200).fill(1e307) }, 0.01))).toEqual({
      code: 'out-of-range',
      where: { name: 'weights' },
    });
  });

  it('rows of weight zero are no rows, whatever stands in them', () => {
    const weights = Float64Array.from({ length: 200 }, (_, i) => (i % 4 === 3 ? 0 : 1 + (i % 2)));
    const keep = Array.from(weights.keys()).filter((i) => weights[i] > 0);
    const wild = withFirst((x, i) => (weights[i] === 0 ? 1e308 : x));
    const kept: FitProblem = {
      ...problem,
      columns: problem.columns.map((column) => Float64Array.from(keep, (i) => column[i])),
      outcome: Uint8Array.from(keep, (i) => problem.outcome[i]),
      weights: Float64Array.from(keep, (i) => weights[i]),
    };
    const wanted = fitAt(kept, 0.01, TIGHT);
    for (const fit of [
      fitAt({ ...wild, weights }, 0.01, TIGHT),
      fitIndependently({ ...wild, weights }, 0.01, { tolerance: 1e-11 }),
    ]) {
      expect(fit.status).toBe('converged');
      expect(fit.intercept).toBeCloseTo(wanted.intercept, 8);
      fit.coefficients.forEach((b, j) => expect(b).toBeCloseTo(wanted.coefficients[j], 8));
      expect(fit.deviance).toBeCloseTo(wanted.deviance, 8);
    }
    // All bads without weight: one class.
    const onlyGoods = Float64Array.from(problem.outcome, (y) => y);
    expect(refusal(() => fitAt({ ...problem, weights: onlyGoods }, 0.01)).code).toBe('one-class');
  });

  it('a constant offset moves the intercept and nothing else, however large', () => {
    const plain = fitAt(problem, 0.01, TIGHT);
    const alone = nullDeviance(problem);
    for (const shift of [-5000, -50, 5, 500, 5000]) {
      const own = { ...problem, offset: new Float64Array(200).fill(shift) };
      const fit = fitAt(own, 0.01);
      expect(fit.status).toBe('converged');
      expect(Math.abs(fit.intercept + shift - plain.intercept)).toBeLessThan(1e-7);
      fit.coefficients.forEach((b, j) => expect(Math.abs(b - plain.coefficients[j])).toBeLessThan(1e-7));
      // The last digit of an intercept near 5000 is 1e-12.
      expect(nullDeviance(own) / alone).toBeCloseTo(1, 12);
    }
  });

  it('the null deviance with an offset is the smallest over all intercepts', () => {
    for (const size of [1, 30, 300]) {
      const offset = Float64Array.from({ length: 200 }, (_, i) => (i % 2 === 0 ? size : -size));
      const own: FitProblem = { ...problem, columns: [], offset };
      const fit = fitAt(own, 1, { tolerance: 1e-13 });
      expect(fit.status).toBe('converged');
      expect(nullDeviance(own) / fit.deviance).toBeCloseTo(1, 10);
    }
  });

  it('penalties from 1e-300 to 1e300', () => {
    const none = fitAt(problem, 0, TIGHT);
    const tiny = fitAt(problem, 1e-300, TIGHT);
    none.coefficients.forEach((b, j) => expect(tiny.coefficients[j]).toBeCloseTo(b, 7));
    for (const mixing of [0, 0.5, 1]) {
      const fit = fitAt({ ...problem, penalty: { mixing, standardize: true } }, 1e300);
      expect(fit.status).toBe('converged');
      fit.coefficients.forEach((b) => expect(Math.abs(b)).toBeLessThan(1e-299));
      expect(fit.deviance / nullDeviance(problem)).toBeCloseTo(1, 12);
    }
    const multipliers = Float64Array.of(1e300, 1, 1);
    for (const lambda of [0.01, 1e300]) {
      const fit = fitAt({ ...problem, penalty: { mixing: 0.5, standardize: true, multipliers } }, lambda);
      expectWhole(fit);
      expect(fit.status).toBe('converged');
      expect(Math.abs(fit.coefficients[0])).toBeLessThan(1e-290);
    }
  });
});

describe('few rows, one column, one bad', () => {
  it('more columns than rows: every penalised fit converges, the unpenalised one is separated', () => {
    const wide = randomProblem(9, 20, 60, lasso);
    for (const mixing of [0, 0.5, 1]) {
      const own: FitProblem = { ...wide, penalty: { mixing, standardize: true } };
      const path = fitPath(own, { count: 40, smallestRatio: 1e-2, earlyStop: true });
      path.fits.forEach((fit) => {
        expectWhole(fit);
        expect(fit.status).toBe('converged');
        expect(fit.optimalityResidual).toBeLessThanOrEqual(1e-9);
      });
      const last = path.fits[path.fits.length - 1];
      const second = fitIndependently(own, last.lambda, { tolerance: 1e-9 });
      expect(second.status).toBe('converged');
      expect(second.objective).toBeCloseTo(last.objective, 10);
    }
    expect(fitAt(wide, 0).status).toBe('separation');
    // The lasso keeps no more columns than there are rows.
    expect(fitAt(wide, 1e-6).coefficients.filter((b) => b !== 0).length).toBeLessThanOrEqual(20);
  });

  it('a single column has its closed form, and none at all the log odds', () => {
    // Goods at 0 and 1: 30 and 60; bads 20 and 10. An unpenalised indicator reproduces both log odds.
    const x = [...Array(30).fill(0), ...Array(60).fill(1), ...Array(20).fill(0), ...Array(10).fill(1)] as number[];
    const y = [...Array(90).fill(1), ...Array(30).fill(0)] as number[];
    const fit = fitAt(small([x], y), 0, { tolerance: 1e-13 });
    expect(fit.intercept).toBeCloseTo(Math.log(30 / 20), 10);
    expect(fit.coefficients[0]).toBeCloseTo(Math.log(60 / 10) - Math.log(30 / 20), 10);
    expect(fitAt(small([], y), 0.3).intercept).toBeCloseTo(Math.log(3), 10);
    // Two rows are the least there can be.
    expectWhole(fitAt(small([[0, 1]], [0, 1]), 0.1));
  });

  it('one bad among two hundred', () => {
    const outcome = Uint8Array.from({ length: 200 }, (_, i) => (i === 7 ? 0 : 1));
    for (const mixing of [0, 0.5, 1]) {
      const own: FitProblem = { ...problem, outcome, penalty: { mixing, standardize: true } };
      for (const lambda of [0.1, 1e-3, 1e-5]) {
        const fit = fitAt(own, lambda);
        expectWhole(fit);
        expect(fit.status).toBe('converged');
        expect(fit.optimalityResidual).toBeLessThanOrEqual(1e-9);
      }
    }
    // The fold that holds the only bad leaves none to train on, and is named.
    const folds = Uint8Array.from(outcome, (_, i) => (i % 5) + 1);
    expect(refusal(() => crossValidate({ ...problem, outcome }, folds, [0.1]))).toEqual({
      code: 'one-class',
      where: { name: 'outcome', fold: 3 },
    });
  });

  it('only constant columns: the log odds at every penalty, and no grid to start from', () => {
    const own = small([Array(10).fill(3) as number[], Array(10).fill(-1e300) as number[]], [0, 0, 1, 1, 1, 1, 1, 1, 1, 1]);
    for (const lambda of [0, 0.1, 10]) {
      const fit = fitAt(own, lambda);
      expect([...fit.coefficients]).toEqual([0, 0]);
      expect(fit.intercept).toBeCloseTo(Math.log(4), 12);
      expect(fit.status).toBe('converged');
    }
    expect(largestLambda(own)).toBe(0);
    expect(refusal(() => fitPath(own, { count: 5, smallestRatio: 0.1, earlyStop: true })).where).toEqual({ name: 'grid' });
  });
});

describe('separation is told wherever it happens', () => {
  const apart = small(
    [
      [-2, -1, 1, 2],
      [1, -1, 1, -1],
    ],
    [0, 0, 1, 1],
    { ...lasso, multipliers: Float64Array.of(0, 1) },
  );

  it('along an unpenalised column at every lambda of a path, with finite numbers', () => {
    const path = fitPath(apart, { lambdas: [0.5, 0.1, 0.01] });
    path.fits.forEach((fit) => {
      expectWhole(fit);
      expect(fit.status).toBe('separation');
    });
  });

  it('in a fold, which is named with the lambda', () => {
    // Without the third fold's rows the unpenalised column separates what is left.
    const own = small(
      [
        [-3, -2, 2, 3, -1, 1, -4, 4, -1, 1],
        [1, 2, 1, 2, 1, 2, 2, 1, 2, 1],
      ],
      [0, 0, 1, 1, 1, 0, 0, 1, 1, 0],
      { ...lasso, multipliers: Float64Array.of(0, 1) },
    );
    const folds = Uint8Array.of(1, 2, 1, 2, 3, 3, 2, 1, 3, 3);
    const result = crossValidate(own, folds, [0.2, 0.1]);
    expect(result.converged).toBe(false);
    expect(result.failures).toEqual([
      { fold: 3, index: 0, status: 'separation' },
      { fold: 3, index: 1, status: 'separation' },
    ]);
    result.mean.forEach((value) => expect(value).toSatisfy(Number.isFinite));
  });

  it('an automatic grid over separated data ends where 0.999 of the deviance is explained, and says so', () => {
    const path = fitPath({ ...apart, penalty: lasso }, { count: 100, smallestRatio: 1e-4, earlyStop: true });
    expect([path.stoppedEarly, path.stoppedBecause]).toEqual([true, 'explained']);
    const last = path.fits[path.fits.length - 1];
    expect(1 - last.deviance / path.nullDeviance).toBeGreaterThan(0.999);
    expect(path.fits.every((fit) => fit.status === 'converged')).toBe(true);
  });
});

describe('predictions that are all equal', () => {
  it('eta, objective and residual agree', () => {
    const fit = fitAt(problem, 10);
    const eta = linearPredictor(problem.columns, fit.intercept, fit.coefficients);
    expect(new Set(eta).size).toBe(1);
    expect(fit.deviance / nullDeviance(problem)).toBeCloseTo(1, 12);
    expect(optimalityResidual(problem, fit)).toBeLessThanOrEqual(1e-9);
  });
});
