import fc from 'fast-check';
import { Generator } from '../random/generator';
import type { FitProblem, Penalty } from '../penalised/problem';

/** A random problem with WOE-like columns of few values, correlated, both classes present and overlapping. For tests only. */
export function randomProblem(seed: number, rows: number, count: number, penalty: Penalty): FitProblem {
  const random = new Generator(seed, 99);
  const shared = Float64Array.from({ length: rows }, () => random.normal());
  const columns = Array.from({ length: count }, () => {
    const load = 0.7 * random.uniform();
    const scale = 0.2 + random.uniform();
    return shared.map((s) => scale * Math.max(-2, Math.min(2, Math.round(load * s + random.normal()))));
  });
  const slopes = Array.from({ length: count }, (_, j) => (j % 3 === 2 ? 0 : random.uniform()));
  const outcome = Uint8Array.from({ length: rows }, (_, i) => {
    const eta = 0.7 + columns.reduce((sum, column, j) => sum + slopes[j] * column[i], 0);
    return random.uniform() < 1 / (1 + Math.exp(-eta)) ? 1 : 0;
  });
  // One of each class in the first rows whatever was drawn.
  outcome[0] = 1;
  outcome[1] = 0;
  return { columns, outcome, penalty };
}

export const mixings = fc.constantFrom(0, 0.3, 0.5, 1);
export const seeds = fc.integer({ min: 0, max: 2 ** 31 });

/** A problem of 60 to 160 rows and 2 to 6 columns with any mixing, standardised or not. */
export const problems = fc
  .record({
    seed: seeds,
    rows: fc.integer({ min: 60, max: 160 }),
    count: fc.integer({ min: 2, max: 6 }),
    mixing: mixings,
    standardize: fc.boolean(),
  })
  .map(({ seed, rows, count, mixing, standardize }) => randomProblem(seed, rows, count, { mixing, standardize }));
