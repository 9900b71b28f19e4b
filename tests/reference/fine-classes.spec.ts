import { assignBins, countBins, fineEdges, fineEdgesOfCounts, quantilesType7, weightOfEvidence } from '@tallystone/numeric';
import { describe, expect, it } from 'vitest';
import { expectAllRead, expectNear, expected } from './reference-files';

interface Side {
  readonly goods: number[];
  readonly bads: number[];
  readonly woe: number[];
  readonly informationValue: number;
}
interface Sample {
  readonly name: string;
  readonly values: number[];
  readonly bad: number[];
  readonly quantiles: number[];
  readonly edges: number[];
  readonly left: Side;
  readonly right: Side;
  readonly fine: readonly { readonly count: number; readonly below: number[]; readonly value: number[] }[];
}

// Source: expected/fine_classes.json, base R (quantile of type 7, cut, table), generators/fine_classes.R.
describe('fine classes are those of R', () => {
  const { probabilities, samples } = expected<{ probabilities: number[]; samples: Sample[] }>('fine_classes.json');
  const at = [...probabilities];

  it.each([...samples.keys()])('sample %i: quantiles of type 7', (index) => {
    const { values, quantiles } = samples[index];
    const own = quantilesType7([...values], at);
    // R interpolates by (1 - h) a + h b, this by a + h (b - a): the last digits of the largest value differ.
    const last = 4 * Number.EPSILON * Math.max(...[...values].map(Math.abs));
    [...quantiles].forEach((quantile, place) => expectNear(own[place], quantile, last, `at ${at[place]}`));
  });

  it.each([...samples.keys()])(
    'sample %i: classes of stated edges, closed at either side, with WOE and information value',
    (index) => {
      const { values, bad, edges, ...sides } = samples[index];
      const outcome = Uint8Array.from(bad, (one) => 1 - one);
      for (const closed of ['left', 'right'] as const) {
        const stated = [...edges];
        const counted = countBins(assignBins(Float64Array.from(values), stated, closed), outcome, stated.length + 1);
        const { goods, bads, woe, informationValue } = sides[closed];
        expect([...counted.goods]).toEqual([...goods]);
        expect([...counted.bads]).toEqual([...bads]);
        const own = weightOfEvidence(counted.goods, counted.bads, { amount: 0.5, when: 'zero-cell' });
        // Two logarithms and some sums of numbers below 10: the last digits.
        [...woe].forEach((value, bin) => expectNear(own.woe[bin], value, 1e-13, `${closed} ${bin}`));
        expectNear(own.informationValue, informationValue, 1e-13, closed);
      }
    },
  );

  it.each([...samples.keys()])('sample %i: fine classes part the values that are nearest to each quantile', (index) => {
    const { values, fine } = samples[index];
    const plain = Float64Array.from(values);
    for (const { count, below, value } of fine) {
      const edges = fineEdges(plain, count);
      const from = [...below];
      const to = [...value];
      expect(edges).toHaveLength(from.length);
      edges.forEach((edge, place) => {
        expect(edge).toBeGreaterThan(from[place]);
        expect(edge).toBeLessThanOrEqual(to[place]);
      });
      expect(fineEdgesOfCounts(plain, new Uint32Array(plain.length).fill(1), count)).toEqual(edges);
    }
  });

  it('every figure of the file has been read', () => expectAllRead('fine_classes.json'));
});
