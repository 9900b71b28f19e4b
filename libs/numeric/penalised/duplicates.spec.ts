import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { fastPath } from '../engine/dispatch';
import { fitIndependently } from '../independent/proximal-gradient';
import { Generator } from '../random/generator';
import { withDuplicatesHeld } from './duplicates';
import { crossValidate } from './folds';
import { fitAt, fitPath, largestLambda } from './path';
import type { FitProblem, Penalty } from './problem';

const lasso: Penalty = { mixing: 1, standardize: true };

/** A binned column, one beside it, and noise; outcomes follow the first two. */
function drawn(seed: number, rows = 400): { columns: Float64Array[]; outcome: Uint8Array } {
  const random = new Generator(seed);
  const columns = [new Float64Array(rows), new Float64Array(rows), new Float64Array(rows)];
  const outcome = new Uint8Array(rows);
  for (let i = 0; i < rows; i++) {
    columns[0][i] = [-0.7, 0.1, 0.9][Math.floor(random.uniform() * 3)];
    columns[1][i] = random.uniform() - 0.5;
    columns[2][i] = random.uniform() - 0.5;
    outcome[i] = random.uniform() < 1 / (1 + Math.exp(-(0.8 + 0.9 * columns[0][i] + columns[1][i]))) ? 1 : 0;
  }
  return { columns, outcome };
}

describe('columns that say the same', () => {
  it('leave all to the first under the lasso, in every solver, with the objective of one column', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 1e6 }),
        fc.constantFrom(1, 2.5, -1, -0.3),
        fc.double({ min: 0.05, max: 0.5, noNaN: true }),
        (seed, slope, share) => {
          const { columns, outcome } = drawn(seed);
          const copy = columns[0].map((value) => 3 + slope * value);
          const single: FitProblem = { columns, outcome, penalty: lasso };
          const doubled: FitProblem = { ...single, columns: [...columns, copy] };
          const lambda = share * largestLambda(single);
          const one = fitAt(single, lambda);
          const first = fitAt(doubled, lambda);
          const second = fitIndependently(doubled, lambda);
          const engine = fastPath(doubled, { lambdas: [lambda] }, { engineFrom: 1 });
          expect(engine.reason).toBeNull();
          for (const fit of [first, second, engine.fits[0]]) {
            expect(fit.status).toBe('converged');
            expect(fit.coefficients[3]).toBe(0);
            expect(fit.objective).toBeCloseTo(one.objective, 12);
            [0, 1, 2].forEach((j) => expect(fit.coefficients[j]).toBeCloseTo(one.coefficients[j], 6));
          }
        },
      ),
      { numRuns: 25 },
    );
  });

  it('are told from columns that only look alike', () => {
    const { columns, outcome } = drawn(5);
    const almost = columns[0].slice();
    almost[377] += 1e-9;
    const held = (penalty: Penalty, ...more: Float64Array[]) => {
      const { upper } = withDuplicatesHeld({ columns: [...columns, ...more], outcome, penalty }).penalty;
      return upper ? Array.from(upper.subarray(3), (limit) => limit === 0) : more.map(() => false);
    };
    const copy = columns[0].slice();
    const scaled = columns[0].map((value) => 7 - 2 * value);
    expect(held(lasso, copy, scaled, almost)).toEqual([true, true, false]);
    // Two copies of each other, neither of the first.
    expect(held(lasso, almost, almost.slice())).toEqual([false, true]);
    // Not standardised, a scaled copy is cheaper or dearer.
    expect(held({ ...lasso, standardize: false }, copy, scaled)).toEqual([true, false]);
    // Ridge and the elastic net have one optimum, with equal shares.
    expect(held({ ...lasso, mixing: 0.5 }, copy)).toEqual([false]);
    expect(held({ ...lasso, mixing: 0 }, copy)).toEqual([false]);
    // The penalty tells them apart.
    expect(held({ ...lasso, multipliers: Float64Array.of(1, 1, 1, 2) }, copy)).toEqual([false]);
    // Unpenalised, whatever the mixing.
    expect(held({ ...lasso, mixing: 0, multipliers: Float64Array.of(0, 1, 1, 0) }, copy)).toEqual([true]);
  });

  it('count as such only with limits that are alike, mirrored for a copy of the other sign', () => {
    const { columns, outcome } = drawn(6);
    const minus = columns[0].map((value) => -value);
    const held = (copy: Float64Array, lower: number[], upper: number[]): boolean => {
      const penalty = { ...lasso, lower: Float64Array.from(lower), upper: Float64Array.from(upper) };
      return withDuplicatesHeld({ columns: [columns[0], copy], outcome, penalty }).penalty.upper?.[1] === 0 && upper[1] !== 0;
    };
    const none = Infinity;
    expect(held(columns[0].slice(), [0, 0], [none, none])).toBe(true);
    expect(held(columns[0].slice(), [0, -none], [none, none])).toBe(false);
    expect(held(minus, [0, 0], [none, none])).toBe(false);
    const mirrored = { ...lasso, lower: Float64Array.of(0, -none), upper: Float64Array.of(none, 0) };
    expect(withDuplicatesHeld({ columns: [columns[0], minus], outcome, penalty: mirrored }).penalty.lower?.[1]).toBe(0);
    // A finite limit can need the second column too.
    expect(held(columns[0].slice(), [0, 0], [0.1, 0.1])).toBe(false);
  });

  it('are compared on rows with weight alone, and held in folds as on all rows', () => {
    const { columns, outcome } = drawn(7);
    const copy = columns[0].slice();
    copy[11] = 5;
    const weights = new Float64Array(outcome.length).fill(1);
    weights[11] = 0;
    const problem: FitProblem = { columns: [...columns, copy], outcome, weights, penalty: lasso };
    expect(
      fitPath(problem, { count: 10, smallestRatio: 0.01, earlyStop: false }).fits.every(
        ({ coefficients }) => coefficients[3] === 0,
      ),
    ).toBe(true);
    const folds = Uint8Array.from(outcome, (_, i) => (i % 5) + 1);
    crossValidate(problem, folds, [0.01, 0.005], {
      onFoldFit: (_fold, _index, { coefficients }) => expect(coefficients[3]).toBe(0),
    });
  });
});
