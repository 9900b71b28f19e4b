import { describe, expect, it } from 'vitest';
import { Generator } from '../random/generator';
import { fitAt } from '../penalised/path';
import type { FitProblem } from '../penalised/problem';
import { randomProblem } from '../testing/problems';
import { multinomial, stratifiedBootstrap } from './bootstrap';
import { resampleFits, stabilityOfCoefficients, stabilityOfFit, stabilityOfPoints } from './stability';

const problem = randomProblem(9, 600, 6, { mixing: 1, standardize: true });
const fit = fitAt(problem, 0.02);

describe('stratifiedBootstrap', () => {
  it('draws goods from goods and bads from bads, as many as there are', () => {
    for (let b = 0; b < 20; b++) {
      const counts = stratifiedBootstrap(problem.outcome, 3, b);
      const total = (good: number): number => counts.reduce((sum, n, i) => sum + (problem.outcome[i] === good ? n : 0), 0);
      const size = (good: number): number => problem.outcome.reduce((sum, y) => sum + (y === good ? 1 : 0), 0);
      expect([total(1), total(0)]).toEqual([size(1), size(0)]);
    }
    expect(stratifiedBootstrap(problem.outcome, 3, 1)).toEqual(stratifiedBootstrap(problem.outcome, 3, 1));
    expect(stratifiedBootstrap(problem.outcome, 3, 1)).not.toEqual(stratifiedBootstrap(problem.outcome, 3, 2));
  });

  it('refuses a seed that is not a whole number', () => expect(() => stratifiedBootstrap(problem.outcome, 0.5, 0)).toThrow());
});

describe('multinomial', () => {
  it('draws as often as asked, never where there is no share', () => {
    const random = new Generator(4);
    const sums = new Float64Array(4);
    for (let r = 0; r < 500; r++) {
      const counts = multinomial(random, 100, [2, 0, 1, 1]);
      expect(counts.reduce((a, b) => a + b, 0)).toBe(100);
      counts.forEach((n, i) => (sums[i] += n / 500));
    }
    expect(sums[1]).toBe(0);
    // Standard error of a mean of 500 draws with variance 25 is 0.22.
    expect(Math.abs(sums[0] - 50)).toBeLessThan(4 * 0.23);
  });
});

describe('resampleFits', () => {
  it('fits each resample as a fit of its own would', () => {
    const draws = resampleFits(problem, 0.02, { seed: 5, count: 6, tolerance: 1e-10, start: fit });
    draws.forEach((draw) => {
      const weights = Float64Array.from(stratifiedBootstrap(problem.outcome, 5, draw.resample));
      const own = fitAt({ ...problem, weights }, 0.02, { tolerance: 1e-10 });
      expect(draw.converged).toBe(true);
      expect(draw.intercept).toBeCloseTo(own.intercept, 7);
      own.coefficients.forEach((b, j) => expect(draw.coefficients[j]).toBeCloseTo(b, 7));
    });
  });

  it('gives the same draws in one batch or in several', () => {
    const all = resampleFits(problem, 0.02, { seed: 5, count: 8, start: fit });
    const parts = [0, 3, 6].flatMap((first) =>
      resampleFits(problem, 0.02, { seed: 5, first, count: Math.min(3, 8 - first), start: fit }),
    );
    expect(parts).toEqual(all);
  });

  it('multiplies the weights of the sample', () => {
    const weighted: FitProblem = { ...problem, weights: Float64Array.from(problem.outcome, (_, i) => 1 + (i % 3)) };
    const [draw] = resampleFits(weighted, 0.02, { seed: 6, count: 1, tolerance: 1e-10 });
    const weights = Float64Array.from(stratifiedBootstrap(problem.outcome, 6, 0), (n, i) => n * (1 + (i % 3)));
    expect(draw.intercept).toBeCloseTo(fitAt({ ...problem, weights }, 0.02, { tolerance: 1e-10 }).intercept, 7);
  });
});

describe('stability', () => {
  const draw = (resample: number, intercept: number, ...coefficients: number[]) => ({
    resample,
    intercept,
    coefficients: Float64Array.from(coefficients),
    converged: true,
  });
  const draws = [draw(0, 1, 0.5, 0), draw(1, 1.2, 0, 0.1), draw(2, 0.8, 0.7, 0), draw(3, 1, -0.1, 0)];

  it('counts selection, signs and percentiles', () => {
    const { coefficients, intercept } = stabilityOfCoefficients(draws, { intercept: 1, coefficients: [0.6, 0] }, 0.5);
    expect(coefficients[0]).toMatchObject({ shareSelected: 0.75, shareSameSign: 0.5, median: 0.25 });
    expect(coefficients[0].lower).toBeCloseTo(-0.025, 12);
    expect(coefficients[0].upper).toBeCloseTo(0.55, 12);
    expect(coefficients[1]).toMatchObject({ shareSelected: 0.25, shareSameSign: null });
    expect(intercept.mean).toBeCloseTo(1, 12);
  });

  it('points are coefficients times a constant', () => {
    const points = stabilityOfPoints(draws, { coefficients: [0.6, 0] }, [[1, -1], [2]], 20, 0.5);
    const { coefficients } = stabilityOfCoefficients(draws, { intercept: 1, coefficients: [0.6, 0] }, 0.5);
    expect(points[0][0].upper).toBeCloseTo((20 / Math.LN2) * coefficients[0].upper, 10);
    expect(points[0][1].lower).toBeCloseTo(-points[0][0].upper, 10);
    expect(points[0][1].shareSameSign).toBe(0.5);
  });

  it('of a fit, all together', () => {
    const seen: number[] = [];
    const result = stabilityOfFit(problem, fit, {
      seed: 2,
      count: 30,
      woe: problem.columns.map(() => [-0.5, 0.5]),
      pointsToDouble: 20,
      onResample: (n) => seen.push(n),
    });
    expect(seen).toHaveLength(30);
    expect(result.converged).toBe(true);
    expect(result.points).toHaveLength(6);
    const strong = fit.coefficients.reduce((best, b, j) => (Math.abs(b) > Math.abs(fit.coefficients[best]) ? j : best), 0);
    expect(result.coefficients[strong]).toMatchObject({ shareSelected: 1, shareSameSign: 1 });
    expect(result.coefficients[strong].lower).toBeLessThan(result.coefficients[strong].upper);
    expect(() => stabilityOfCoefficients(draws.slice(0, 1), fit)).toThrow();
  });
});
