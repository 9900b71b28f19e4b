import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Generator } from '../random/generator';
import { clustersAt, hierarchy } from './clusters';
import { codedCorrelation } from './coded-correlation';
import { correlation, inflationOf, varianceInflation } from './collinearity';

function invented(seed: number, rows: number, count: number) {
  const random = new Generator(seed);
  const base = Array.from({ length: rows }, () => random.uniform());
  const columns = Array.from({ length: count }, () => ({
    codes: Uint8Array.from(base, (value) => Math.min(5, Math.floor((random.uniform() < 0.5 ? value : random.uniform()) * 6))),
    // Far from zero: means must not eat the digits.
    values: Array.from({ length: 6 }, () => 1000 + random.uniform()),
  }));
  const use = Uint8Array.from({ length: rows }, () => (random.uniform() < 0.8 ? 1 : 0));
  const weights = Float64Array.from({ length: rows }, () => 0.2 + random.uniform());
  return { columns, use, weights };
}

describe('codedCorrelation', () => {
  it.each([
    [1, 1, false],
    [2, 2, true],
    [3, 5, false],
    [4, 6, true],
  ])('is the correlation of the decoded columns, sample %i of %i columns (weights: %s)', (seed, count, weighted) => {
    const { columns, use, weights } = invented(seed, 5000, count);
    const rows = [...use.keys()].filter((row) => use[row] === 1);
    const decoded = columns.map(({ codes, values }) => Float64Array.from(rows, (row) => values[codes[row]]));
    const expected = correlation(decoded, weighted ? Float64Array.from(rows, (row) => weights[row]) : undefined);
    const matrix = codedCorrelation(columns, use, weighted ? weights : null);
    // Both sum some thousand products of doubles around their means.
    expected.forEach((line, j) =>
      line.forEach((value, k) => expect(Math.abs(matrix[j * count + k] - value)).toBeLessThan(1e-11)),
    );
  });

  it('counts weights as repeated rows', () => {
    const codes = [Uint8Array.of(0, 1, 2, 1), Uint8Array.of(1, 0, 1, 2)];
    const values = [-1, 0.2, 1.4];
    const repeated = codes.map((column) => Uint8Array.from([0, 0, 1, 2, 2, 2, 3], (row) => column[row]));
    const weighted = codedCorrelation(
      codes.map((one) => ({ codes: one, values })),
      new Uint8Array(4).fill(1),
      [2, 1, 3, 1],
    );
    const plain = codedCorrelation(
      repeated.map((one) => ({ codes: one, values })),
      new Uint8Array(7).fill(1),
    );
    expect(weighted[1]).toBeCloseTo(plain[1], 14);
  });

  it('has no number for a column without variance, and takes an unseen code as neutral', () => {
    const use = new Uint8Array(4).fill(1);
    const matrix = codedCorrelation(
      [
        { codes: Uint8Array.of(2, 2, 2, 2), values: [0.1, 0.2, 0.3] },
        { codes: Uint8Array.of(0, 1, 0, 255), values: [-1, 1] },
      ],
      use,
    );
    expect([...matrix]).toEqual([NaN, NaN, NaN, 1]);
    expect(() => codedCorrelation([{ codes: Uint8Array.of(0), values: [1] }], Uint8Array.of(0))).toThrow('no row is in use');
  });
});

describe('inflation from a matrix', () => {
  it('is that of the columns', () => {
    const { columns, use } = invented(9, 400, 4);
    const rows = [...use.keys()].filter((row) => use[row] === 1);
    const decoded = columns.map(({ codes, values }) => Float64Array.from(rows, (row) => values[codes[row]]));
    expect([...inflationOf(correlation(decoded))]).toEqual([...varianceInflation(decoded)]);
    expect(inflationOf([[1, 0.6], [0.6, 1]])[0]).toBeCloseTo(1 / (1 - 0.36), 12); // prettier-ignore
  });
});

describe('hierarchy', () => {
  const symmetric = (count: number, values: readonly number[]): number[] => {
    const matrix = new Array<number>(count * count).fill(1);
    let next = 0;
    for (let j = 0; j < count; j++) for (let k = 0; k < j; k++) matrix[j * count + k] = matrix[k * count + j] = values[next++];
    return matrix;
  };

  it('joins the nearest first, by the farthest of their columns', () => {
    // 0 and 1 are near; 2 is near to 1 but not to 0.
    const merges = hierarchy(symmetric(3, [0.95, 0.3, -0.9]), 3);
    expect(merges[0]).toMatchObject({ left: [0], right: [1] });
    expect(merges[1].height).toBeCloseTo(0.7, 12);
    expect(clustersAt(merges, 3, 0.7)).toEqual([[0, 1], [2]]);
    expect(clustersAt(merges, 3, 0.3)).toEqual([[0, 1, 2]]);
  });

  it('keeps its promise: in a cluster every two correlate by the threshold, and no two clusters could still be one', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 8 }).chain((count) =>
          fc.tuple(
            fc.constant(count),
            fc.array(fc.double({ min: -1, max: 1, noNaN: true }), {
              minLength: (count * (count - 1)) / 2,
              maxLength: (count * (count - 1)) / 2,
            }),
            fc.double({ min: 0.05, max: 0.95, noNaN: true }),
          ),
        ),
        ([count, values, threshold]) => {
          const matrix = symmetric(count, values);
          const clusters = clustersAt(hierarchy(matrix, count), count, threshold);
          expect(clusters.flat().sort((a, b) => a - b)).toEqual(Array.from({ length: count }, (_, j) => j));
          const nearest = (a: number[], b: number[]): number =>
            Math.min(...a.flatMap((j) => b.map((k) => Math.abs(matrix[j * count + k]))));
          for (const cluster of clusters) expect(nearest(cluster, cluster)).toBeGreaterThanOrEqual(threshold - 1e-9);
          clusters.forEach((a, place) =>
            clusters.slice(place + 1).forEach((b) => expect(nearest(a, b)).toBeLessThan(threshold + 1e-9)),
          );
        },
      ),
    );
  });
});
