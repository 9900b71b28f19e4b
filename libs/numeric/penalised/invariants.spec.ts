import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { weightOfEvidence } from '../binning/weight-of-evidence';
import { fitIndependently } from '../independent/proximal-gradient';
import { Generator } from '../random/generator';
import { problems, randomProblem, seeds } from '../testing/problems';
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

  it('the objective never rises from one iteration to the next', () => {
    fc.assert(
      fc.property(problems, shares, (problem, share) => {
        const trace: number[] = [];
        const start = { ...fitAt(problem, largestLambda(problem)) };
        fitAt(problem, share * share * largestLambda(problem), { start, onIteration: (value) => trace.push(value) });
        trace.slice(1).forEach((value, k) => expect(value).toBeLessThanOrEqual(trace[k] + 1e-13));
      }),
      { numRuns: 60 },
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

  it('no penalised column is in at the largest lambda, and one is just below', () => {
    fc.assert(
      fc.property(problems, fc.constantFrom(0.3, 0.5, 1), fc.boolean(), (problem, mixing, oneFree) => {
        const multipliers = new Float64Array(problem.columns.length).fill(1);
        if (oneFree) multipliers[0] = 0;
        const own: FitProblem = { ...problem, penalty: { ...problem.penalty, mixing, multipliers } };
        const largest = largestLambda(own);
        const kept = (lambda: number): number =>
          fitAt(own, lambda).coefficients.filter((b, j) => b !== 0 && multipliers[j] > 0).length;
        expect(kept(largest)).toBe(0);
        expect(kept(0.999 * largest)).toBeGreaterThanOrEqual(1);
      }),
      { numRuns: 40 },
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
      }),
      { numRuns: 30 },
    );
  });

  it('duplicate columns under the lasso share the coefficient of one', () => {
    const problem = randomProblem(3, 150, 3, { mixing: 1, standardize: true });
    const doubled: FitProblem = { ...problem, columns: [...problem.columns, problem.columns[0]] };
    const lambda = 0.1 * largestLambda(problem);
    const one = fitAt(problem, lambda, TIGHT);
    const two = fitAt(doubled, lambda, TIGHT);
    expect(two.status).toBe('converged');
    expect(two.coefficients[0] + two.coefficients[3]).toBeCloseTo(one.coefficients[0], 8);
  });
});
