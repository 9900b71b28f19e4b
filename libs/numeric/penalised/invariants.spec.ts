import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { weightOfEvidence } from '../binning/weight-of-evidence';
import { fitIndependently } from '../independent/proximal-gradient';
import { Generator } from '../random/generator';
import { problems, seeds } from '../testing/problems';
import { objective, optimalityResidual } from './optimality';
import { fitAt, fitPath, largestLambda } from './path';
import type { Fit, FitProblem } from './problem';

const TIGHT = { tolerance: 1e-11 };
const shares = fc.double({ min: 0.02, max: 0.8, noNaN: true });

function expectSame(a: Fit, b: Fit, tolerance: number, factor: (j: number) => number = () => 1): void {
  expect(Math.abs(a.intercept - b.intercept)).toBeLessThanOrEqual(tolerance);
  a.coefficients.forEach((value, j) =>
    expect(Math.abs(value - factor(j) * b.coefficients[j])).toBeLessThanOrEqual(tolerance * Math.max(1, factor(j))),
  );
}

// A residual of 1e-11 over a smallest curvature near 1e-3 of these small random designs bounds coefficients to 1e-8; 1e-7 leaves room.
describe('what must hold for every fit', () => {
  it('converges to a residual that the definition confirms', () => {
    fc.assert(
      fc.property(problems, shares, (problem, share) => {
        const lambda = share * largestLambda(problem);
        const fit = fitAt(problem, lambda);
        expect(fit.status).toBe('converged');
        expect(optimalityResidual(problem, fit)).toBeLessThanOrEqual(1e-9 + 1e-13);
        expect(Math.abs(objective(problem, fit) - fit.objective)).toBeLessThanOrEqual(1e-12);
      }),
      { numRuns: 60 },
    );
  });

  it('the objective never rises from one iteration to the next, from a warm start or a bad one, with limits or without', () => {
    fc.assert(
      fc.property(problems, fc.constantFrom(0, 0.001, 0.05, 0.6), fc.boolean(), fc.boolean(), (problem, share, warm, limited) => {
        const upper = new Float64Array(problem.columns.length).fill(limited ? 0.2 : Infinity);
        const own: FitProblem = { ...problem, penalty: { ...problem.penalty, upper } };
        const trace: number[] = [];
        const start = fitAt(own, largestLambda(own));
        const lambda = share * start.lambda;
        const point = warm ? start : { ...start, intercept: 3, coefficients: upper.map((_, j) => (j % 2 === 0 ? -1 : 0.1)) };
        const fit = fitAt(own, lambda, { start: point, onIteration: (value) => trace.push(value) });
        expect(fit.status).toBe('converged');
        const values = [objective(own, { ...point, lambda }), ...trace];
        // Rounding of a mean of 160 terms near 1.
        values.slice(1).forEach((value, k) => expect(value).toBeLessThanOrEqual(values[k] + 1e-13));
        expect(values[values.length - 1]).toBeCloseTo(fit.objective, 12);
      }),
      { numRuns: 80 },
    );
  });

  it('no other point has a smaller objective', () => {
    fc.assert(
      fc.property(problems, shares, seeds, (problem, share, seed) => {
        const lambda = share * largestLambda(problem);
        const fit = fitAt(problem, lambda);
        const random = new Generator(seed);
        for (let k = 0; k < 10; k++) {
          const size = 10 ** (-4 + 4 * random.uniform());
          const coefficients = fit.coefficients.map((value) => value + size * random.normal());
          const other = { lambda, intercept: fit.intercept + size * random.normal(), coefficients };
          expect(objective(problem, other)).toBeGreaterThanOrEqual(fit.objective - 1e-12);
        }
      }),
      { numRuns: 40 },
    );
  });

  it('integer weights equal repeated rows', () => {
    fc.assert(
      fc.property(problems, shares, seeds, (problem, share, seed) => {
        const random = new Generator(seed);
        const counts = Float64Array.from(problem.outcome, () => random.below(4));
        counts[0] = counts[1] = 1;
        const rows = Array.from(counts).flatMap((count, i) => Array.from({ length: count }, () => i));
        const weighted: FitProblem = { ...problem, weights: counts };
        const repeated: FitProblem = {
          ...problem,
          columns: problem.columns.map((column) => Float64Array.from(rows, (i) => column[i])),
          outcome: Uint8Array.from(rows, (i) => problem.outcome[i]),
        };
        const lambda = share * largestLambda(weighted);
        expectSame(fitAt(weighted, lambda, TIGHT), fitAt(repeated, lambda, TIGHT), 1e-7);
      }),
      { numRuns: 40 },
    );
  });

  it('scaling a column scales its coefficient when standardising', () => {
    fc.assert(
      fc.property(problems, shares, fc.constantFrom(1e-3, 0.5, 7, 1000), (problem, share, factor) => {
        const standardised: FitProblem = { ...problem, penalty: { ...problem.penalty, standardize: true } };
        const scaled: FitProblem = {
          ...standardised,
          columns: standardised.columns.map((column, j) => (j === 0 ? column.map((x) => factor * x) : column)),
        };
        const lambda = share * largestLambda(standardised);
        expectSame(fitAt(standardised, lambda, TIGHT), fitAt(scaled, lambda, TIGHT), 1e-7, (j) => (j === 0 ? factor : 1));
      }),
      { numRuns: 40 },
    );
  });

  it('the order of rows and of columns does not matter', () => {
    fc.assert(
      fc.property(problems, shares, (problem, share) => {
        const last = problem.columns.length - 1;
        const turned: FitProblem = {
          ...problem,
          columns: problem.columns.map((_, j) => problem.columns[last - j].slice().reverse()),
          outcome: problem.outcome.slice().reverse(),
        };
        const lambda = share * largestLambda(problem);
        const a = fitAt(problem, lambda, TIGHT);
        const b = fitAt(turned, lambda, TIGHT);
        expectSame(a, { ...b, coefficients: b.coefficients.slice().reverse() }, 1e-7);
      }),
      { numRuns: 40 },
    );
  });

  it('good and bad mirrored change every sign', () => {
    fc.assert(
      fc.property(problems, shares, (problem, share) => {
        const mirrored: FitProblem = { ...problem, outcome: problem.outcome.map((y) => 1 - y) };
        const lambda = share * largestLambda(problem);
        const a = fitAt(problem, lambda, TIGHT);
        const b = fitAt(mirrored, lambda, TIGHT);
        expectSame(a, { ...b, intercept: -b.intercept, coefficients: b.coefficients.map((value) => -value) }, 1e-7);
      }),
      { numRuns: 40 },
    );
  });

  it('no penalised column is in at the largest lambda, and one is just below, for every mixing of at least 0.001', () => {
    const mixing = fc.constantFrom(0.001, 0.01, 0.1, 0.3, 0.5, 0.9, 1);
    fc.assert(
      fc.property(problems, mixing, fc.boolean(), fc.boolean(), fc.boolean(), (problem, mix, oneFree, limited, weighted) => {
        const multipliers = Float64Array.from(problem.columns, (_, j) => 1 + (j % 2));
        if (oneFree) multipliers[0] = 0;
        const own: FitProblem = {
          ...problem,
          weights: weighted ? Float64Array.from(problem.outcome, (_, i) => (i % 4) + 0.5) : undefined,
          offset: weighted ? Float64Array.from(problem.outcome, (_, i) => (i % 3) - 1) : undefined,
          penalty: {
            ...problem.penalty,
            mixing: mix,
            multipliers,
            lower: limited ? new Float64Array(problem.columns.length) : undefined,
          },
        };
        const largest = largestLambda(own);
        // With a limit at 0 it can be that no gradient points inward at all: then nothing enters anywhere.
        fc.pre(largest > 1e-6);
        const kept = (lambda: number): number =>
          fitAt(own, lambda).coefficients.filter((b, j) => b !== 0 && multipliers[j] > 0).length;
        expect(kept(largest)).toBe(0);
        expect(kept(1.5 * largest)).toBe(0);
        expect(kept(0.999 * largest)).toBeGreaterThanOrEqual(1);
      }),
      { numRuns: 80 },
    );
  });

  it('limits hold, and a limit that does not bind changes nothing', () => {
    fc.assert(
      fc.property(problems, shares, (problem, share) => {
        const count = problem.columns.length;
        const lower = new Float64Array(count);
        const own: FitProblem = { ...problem, penalty: { ...problem.penalty, lower, upper: new Float64Array(count).fill(0.3) } };
        const lambda = 0.2 * share * largestLambda(problem);
        const fit = fitAt(own, lambda, TIGHT);
        fit.coefficients.forEach((value) => {
          expect(value).toBeGreaterThanOrEqual(0);
          expect(value).toBeLessThanOrEqual(0.3 + 1e-15);
        });
        expect(fit.status).toBe('converged');
        const second = fitIndependently(own, lambda, TIGHT);
        expectSame(fit, second, 1e-6);
        const wide: FitProblem = { ...problem, penalty: { ...problem.penalty, lower: new Float64Array(count).fill(-1e6) } };
        expectSame(fitAt(problem, lambda, TIGHT), fitAt(wide, lambda, TIGHT), 1e-7);
      }),
      { numRuns: 40 },
    );
  });

  it('agrees with the independent method', () => {
    fc.assert(
      fc.property(problems, shares, (problem, share) => {
        const lambda = share * largestLambda(problem);
        expectSame(fitAt(problem, lambda, TIGHT), fitIndependently(problem, lambda, { tolerance: 1e-10 }), 1e-6);
      }),
      { numRuns: 40 },
    );
  });

  it('an intercept alone gives the log odds, whatever the weights', () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: 0.1, max: 9, noNaN: true }), { minLength: 4, maxLength: 40 }), (weights) => {
        const outcome = Uint8Array.from(weights, (_, i) => (i % 3 === 0 ? 0 : 1));
        const sum = (good: number): number => weights.reduce((total, w, i) => total + (outcome[i] === good ? w : 0), 0);
        const fit = fitAt(
          { columns: [], outcome, weights: Float64Array.from(weights), penalty: { mixing: 1, standardize: true } },
          0.1,
          TIGHT,
        );
        expect(fit.intercept).toBeCloseTo(Math.log(sum(1) / sum(0)), 10);
        expect(fit.status).toBe('converged');
      }),
    );
  });

  // I. J. Good 1950: posterior log odds = prior log odds + weight of evidence.
  it('an unpenalised fit on one unsmoothed WOE column has slope 1 and the prior log odds as intercept', () => {
    const count = fc.integer({ min: 5, max: 500 });
    fc.assert(
      fc.property(fc.array(fc.tuple(count, count), { minLength: 2, maxLength: 8 }), (bins) => {
        const goods = bins.map(([g]) => g);
        const bads = bins.map(([, b]) => b);
        const { woe } = weightOfEvidence(goods, bads, { amount: 0, when: 'never' });
        fc.pre(Math.max(...woe) - Math.min(...woe) > 0.05);
        const problem: FitProblem = {
          columns: [Float64Array.from([...woe, ...woe])],
          outcome: Uint8Array.from([...bins.map(() => 1), ...bins.map(() => 0)]),
          weights: Float64Array.from([...goods, ...bads]),
          penalty: { mixing: 1, standardize: true },
        };
        const fit = fitAt(problem, 0, { tolerance: 1e-14 });
        const prior = Math.log(goods.reduce((a, b) => a + b, 0) / bads.reduce((a, b) => a + b, 0));
        expect(Math.abs(fit.coefficients[0] - 1)).toBeLessThanOrEqual(1e-10);
        expect(Math.abs(fit.intercept - prior)).toBeLessThanOrEqual(1e-10);
      }),
      { numRuns: 60 },
    );
  });

  it('the deviance falls and the penalty part grows along a path', () => {
    fc.assert(
      fc.property(problems, (problem) => {
        const { fits, nullDeviance } = fitPath(problem, { count: 12, smallestRatio: 0.01, earlyStop: false });
        fits.slice(1).forEach((fit, k) => expect(fit.deviance).toBeLessThanOrEqual(fits[k].deviance + 1e-7 * nullDeviance));
        const size = fits.map((fit) => (fit.objective - fit.deviance / (2 * problem.outcome.length)) / fit.lambda);
        size.slice(1).forEach((value, k) => expect(value).toBeGreaterThanOrEqual(size[k] * (1 - 1e-6) - 1e-9));
      }),
      { numRuns: 30 },
    );
  });

  // Two of a column cost lambda (b/2)^2/2 each, together what one costs at half the multiplier.
  it('a duplicated column shares equally under ridge, and as under half the penalty', () => {
    fc.assert(
      fc.property(problems, shares, (drawn, share) => {
        const problem: FitProblem = { ...drawn, penalty: { ...drawn.penalty, mixing: 0 } };
        const doubled: FitProblem = { ...problem, columns: [...problem.columns, problem.columns[0]] };
        const multipliers = Float64Array.from(problem.columns, (_, j) => (j === 0 ? 0.5 : 1));
        const lambda = 0.01 * share * largestLambda(problem);
        const two = fitAt(doubled, lambda, TIGHT);
        const one = fitAt({ ...problem, penalty: { ...problem.penalty, multipliers } }, lambda, TIGHT);
        const last = two.coefficients.length - 1;
        expect(two.status).toBe('converged');
        expect(two.coefficients[0]).toBeCloseTo(two.coefficients[last], 8);
        expect(two.coefficients[0] + two.coefficients[last]).toBeCloseTo(one.coefficients[0], 7);
        expect(two.objective).toBeCloseTo(one.objective, 12);
      }),
      { numRuns: 40 },
    );
  });

  it('a duplicated column under the lasso has many optima: every split of one sign has the same objective, and one is found', () => {
    fc.assert(
      fc.property(problems, shares, fc.double({ min: 0, max: 1, noNaN: true }), (drawn, share, part) => {
        const problem: FitProblem = { ...drawn, penalty: { ...drawn.penalty, mixing: 1 } };
        const doubled: FitProblem = { ...problem, columns: [...problem.columns, problem.columns[0]] };
        const lambda = 0.3 * share * largestLambda(problem);
        const one = fitAt(problem, lambda, TIGHT);
        const two = fitAt(doubled, lambda, TIGHT);
        const last = two.coefficients.length - 1;
        expect(two.status).toBe('converged');
        expect(two.objective).toBeCloseTo(one.objective, 12);
        expect(two.coefficients[0] + two.coefficients[last]).toBeCloseTo(one.coefficients[0], 7);
        expect(two.coefficients[0] * two.coefficients[last]).toBeGreaterThanOrEqual(0);
        const split = two.coefficients.slice();
        split[0] = part * one.coefficients[0];
        split[last] = (1 - part) * one.coefficients[0];
        const other = { lambda, intercept: two.intercept, coefficients: split };
        expect(objective(doubled, other)).toBeCloseTo(two.objective, 12);
        expect(optimalityResidual(doubled, other)).toBeLessThanOrEqual(1e-9);
      }),
      { numRuns: 40 },
    );
  });

  it('weights count by their proportions, and a shifted column changes the intercept alone', () => {
    fc.assert(
      fc.property(
        problems,
        shares,
        fc.constantFrom(0.01, 3, 1e5),
        fc.constantFrom(-7, 0.3, 100),
        (problem, share, factor, shift) => {
          const weights = Float64Array.from(problem.outcome, (_, i) => 1 + (i % 5));
          const weighted: FitProblem = { ...problem, weights };
          const lambda = share * largestLambda(weighted);
          const fit = fitAt(weighted, lambda, TIGHT);
          const heavier = fitAt({ ...weighted, weights: weights.map((w) => factor * w) }, lambda, TIGHT);
          expectSame(fit, heavier, 1e-7);
          const shifted: FitProblem = {
            ...weighted,
            columns: problem.columns.map((column, j) => (j === 0 ? column.map((x) => x + shift) : column)),
          };
          const moved = fitAt(shifted, lambda, TIGHT);
          expectSame(fit, { ...moved, intercept: moved.intercept + shift * moved.coefficients[0] }, 1e-6);
        },
      ),
      { numRuns: 40 },
    );
  });

  it('standardising is fitting columns that were standardised before', () => {
    fc.assert(
      fc.property(problems, shares, seeds, (problem, share, seed) => {
        const random = new Generator(seed);
        const weights = Float64Array.from(problem.outcome, () => 0.2 + random.uniform());
        const total = weights.reduce((sum, w) => sum + w, 0);
        const mean = (column: Float64Array): number => column.reduce((sum, x, i) => sum + weights[i] * x, 0) / total;
        const deviations = problem.columns.map((column) => {
          const centre = mean(column);
          return Math.sqrt(mean(column.map((x) => (x - centre) ** 2)));
        });
        const own: FitProblem = { ...problem, weights, penalty: { ...problem.penalty, standardize: true } };
        const before: FitProblem = {
          ...own,
          columns: own.columns.map((column, j) => column.map((x) => x / deviations[j])),
          penalty: { ...own.penalty, standardize: false },
        };
        const lambda = share * largestLambda(own);
        const a = fitAt(own, lambda, TIGHT);
        const b = fitAt(before, lambda, TIGHT);
        expectSame(a, { ...b, coefficients: b.coefficients.map((value, j) => value / deviations[j]) }, 1e-7);
        expect(a.objective).toBeCloseTo(b.objective, 12);
      }),
      { numRuns: 40 },
    );
  });
});
