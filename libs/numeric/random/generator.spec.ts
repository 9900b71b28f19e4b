import { describe, expect, it } from 'vitest';
import { binomialTail, chiSquareTail } from '../distributions/tails';
import { Generator } from './generator';

/** Chi-square p-value of counts against probabilities; cells expected below 5 are pooled with their neighbour. */
function fitPValue(counts: number[], probabilities: number[], draws: number): number {
  let statistic = 0;
  let cells = 0;
  let observed = 0;
  let expected = 0;
  counts.forEach((count, k) => {
    observed += count;
    expected += draws * probabilities[k];
    if (expected < 5 && k < counts.length - 1) return;
    if (expected > 0) statistic += (observed - expected) ** 2 / expected;
    cells++;
    observed = expected = 0;
  });
  return chiSquareTail(statistic, cells - 1);
}

// Seeds are fixed, so these p-values never change; 1e-3 only says that the draws look as they should.
describe('Generator', () => {
  it('gives the same numbers for the same seed and stream, and others otherwise', () => {
    const take = (seed: number, stream: number): number[] => {
      const random = new Generator(seed, stream);
      return Array.from({ length: 5 }, () => random.uint32());
    };
    expect(take(7, 3)).toEqual(take(7, 3));
    expect(new Set([take(7, 3), take(7, 4), take(8, 3), take(7 + 2 ** 32, 3)].map(String)).size).toBe(4);
    // Pinned: a change of these numbers would change every stored resample.
    expect(take(1, 0)).toMatchInlineSnapshot(`
      [
        2697496199,
        3676327764,
        686367521,
        480391640,
        3731367163,
      ]
    `);
  });

  it('is uniform on whole numbers and on [0, 1)', () => {
    const random = new Generator(1);
    const counts = new Array<number>(7).fill(0);
    for (let i = 0; i < 70_000; i++) counts[random.below(7)]++;
    expect(fitPValue(counts, new Array<number>(7).fill(1 / 7), 70_000)).toBeGreaterThan(1e-3);
    let sum = 0;
    for (let i = 0; i < 20_000; i++) sum += random.uniform();
    expect(Math.abs(sum / 20_000 - 0.5)).toBeLessThan(4 / Math.sqrt(12 * 20_000));
  });

  it.each([
    [20, 0.1],
    [20, 0.9],
    [200, 0.2],
    [1000, 0.03],
    [60, 0.5],
  ])('binomial(%i, %f) has its distribution', (trials, p) => {
    const random = new Generator(5);
    const draws = 20_000;
    const counts = new Array<number>(trials + 1).fill(0);
    for (let i = 0; i < draws; i++) counts[random.binomial(trials, p)]++;
    const probabilities = counts.map((_, k) => binomialTail(k, trials, p) - binomialTail(k + 1, trials, p));
    expect(fitPValue(counts, probabilities, draws)).toBeGreaterThan(1e-3);
  });

  it('normal has mean 0 and variance 1', () => {
    const random = new Generator(2);
    const values = Array.from({ length: 20_000 }, () => random.normal());
    const mean = values.reduce((a, b) => a + b, 0) / values.length;
    const variance = values.reduce((a, b) => a + b * b, 0) / values.length;
    expect(Math.abs(mean)).toBeLessThan(4 / Math.sqrt(20_000));
    expect(Math.abs(variance - 1)).toBeLessThan(4 * Math.sqrt(2 / 20_000));
  });
});
