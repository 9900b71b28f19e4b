import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Generator } from '../random/generator';
import { randomProblem, seeds } from '../testing/problems';
import { factorise, solveFactorised } from './cholesky';
import { Design } from './design';
import { softThreshold, violation } from './penalty';
import { minimiseModel } from './quadratic-model';

/** A random symmetric matrix with positive eigenvalues, as a sum of squares. */
function positive(random: Generator, size: number): Float64Array {
  const rows = Array.from({ length: size + 3 }, () => Float64Array.from({ length: size }, () => random.normal()));
  const matrix = new Float64Array(size * size);
  for (const row of rows) for (let a = 0; a < size; a++) for (let b = 0; b < size; b++) matrix[a * size + b] += row[a] * row[b];
  return matrix;
}

describe('the parts of the solver', () => {
  it('soft-thresholding', () => expect([3, -3, 0.5, -0.5].map((x) => softThreshold(x, 1))).toEqual([2, -2, 0, 0]));

  it('violation: only what points inward counts', () => {
    const free = [-Infinity, Infinity] as const;
    expect(violation(0, 0.4, 0.5, 0, ...free)).toBe(0);
    expect(violation(0, -0.7, 0.5, 0, ...free)).toBeCloseTo(0.2, 14);
    expect(violation(0, 0.7, 0.5, 0, 0, Infinity)).toBe(0);
    expect(violation(0, -0.7, 0.5, 0, 0, Infinity)).toBeCloseTo(0.2, 14);
    expect(violation(2, -0.7, 0.5, 0.1, ...free)).toBeCloseTo(0, 14);
    // At a limit a gradient that pushes outward is no violation, one that pulls back is.
    expect(violation(1, -3, 0.5, 0, 0, 1)).toBe(0);
    expect(violation(1, 3, 0.5, 0, 0, 1)).toBe(3.5);
  });

  it('Cholesky solves, and says when it cannot', () => {
    fc.assert(
      fc.property(seeds, fc.integer({ min: 1, max: 8 }), (seed, size) => {
        const random = new Generator(seed);
        const matrix = positive(random, size);
        const wanted = Float64Array.from({ length: size }, () => random.normal());
        const b = Float64Array.from({ length: size }, (_, a) => wanted.reduce((sum, x, k) => sum + matrix[a * size + k] * x, 0));
        expect(factorise(matrix, size)).toBe(true);
        solveFactorised(matrix, size, b);
        b.forEach((x, k) => expect(x).toBeCloseTo(wanted[k], 6));
      }),
    );
    expect(factorise(Float64Array.of(1, 1, 1, 1), 2)).toBe(false);
  });

  it('the quadratic model is solved to its conditions, with limits and without', () => {
    fc.assert(
      fc.property(seeds, fc.integer({ min: 1, max: 8 }), fc.boolean(), (seed, size, limited) => {
        const random = new Generator(seed);
        const fill = (of: () => number): Float64Array => Float64Array.from({ length: size }, of);
        const model = {
          hessian: positive(random, size),
          l1: fill(() => 3 * random.uniform()),
          l2: fill(() => random.uniform()),
          lower: fill(() => (limited ? -0.3 : -Infinity)),
          upper: fill(() => (limited ? 0.2 : Infinity)),
        };
        const linear = fill(() => 8 * random.normal());
        const t = new Float64Array(size);
        minimiseModel(
          model,
          t,
          linear.slice(),
          fill(() => 1e-10),
        );
        t.forEach((value, j) => {
          const gradient = linear[j] + t.reduce((sum, x, k) => sum + model.hessian[j * size + k] * x, 0);
          expect(violation(value, gradient, model.l1[j], model.l2[j], model.lower[j], model.upper[j])).toBeLessThanOrEqual(1e-8);
        });
      }),
      { numRuns: 200 },
    );
  });

  it('design products are those of plain sums', () => {
    const { columns, outcome } = randomProblem(4, 2500, 5, { mixing: 1, standardize: true });
    const random = new Generator(6);
    const weights = Float64Array.from(outcome, () => random.below(3));
    const design = new Design(columns, outcome.length, weights);
    const root = design.share.map(Math.sqrt);
    const list = [0, 2, 4];
    const gram = design.gram(root, list);
    const scaled = list.map((j) => columns[j].map((x) => (x - design.centre[j]) / design.scale[j]));
    const slices = [new Float64Array(outcome.length).fill(1), ...scaled];
    slices.forEach((a, p) =>
      slices.forEach((b, q) =>
        expect(gram[p * 4 + q]).toBeCloseTo(
          design.share.reduce((sum, s, i) => sum + s * a[i] * b[i], 0),
          12,
        ),
      ),
    );
    // Standardised with the weights: variances 1, centred on the intercept's column.
    expect(gram[5]).toBeCloseTo(1, 12);
    expect(gram[1]).toBeCloseTo(0, 12);
    const asNumbers = Float64Array.from(outcome, (y) => y - 0.5);
    const gradient = new Float64Array(5);
    design.gradient(asNumbers, [0, 1, 2, 3, 4], gradient);
    gradient.forEach((g, j) =>
      expect(g).toBeCloseTo(columns[j].reduce((sum, x, i) => sum + x * asNumbers[i], 0) / design.scale[j], 8),
    );
    const eta = new Float64Array(outcome.length);
    const coefficients = Float64Array.of(0.3, 0, -1, 2, 0.1);
    design.linearPredictor(0.5, coefficients, undefined, eta);
    expect(eta[2400]).toBeCloseTo(
      columns.reduce((sum, column, j) => sum + coefficients[j] * column[2400], 0.5),
      12,
    );
  });
});
