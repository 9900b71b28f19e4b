import { gini } from '@tallystone/numeric';
import { describe, expect, it } from 'vitest';
import { codeCharacteristics } from './coding';
import { decisionsChanged } from './decisions-changed';
import { choosePenalty, trainPaths } from './fit';
import { AGE, HOME, INCOME, inventedSample, sourceOfSample, specificationOf, type Sample } from './invented-sample';
import { outcomeRefits } from './outcome-refits';
import { prepare } from './prepare';
import { replay } from './replay';

const sample = inventedSample(3000);
const characteristics = [AGE, INCOME, HOME];
const fit = { mixing: 1, lambda: { grid: [0.05, 0.005] }, choose: 'value' };

function refits(from: Sample, more: object = {}, approvalRate?: number) {
  const specification = specificationOf({ characteristics, fit, ...more });
  const source = sourceOfSample(from);
  const prepared = prepare(specification, source);
  const coded = codeCharacteristics(specification, source, prepared);
  const { path: trained } = choosePenalty(specification, trainPaths({ specification, prepared, coded, source }));
  return outcomeRefits({ specification, prepared, coded, source, trained, indices: [1, 0, 1], approvalRate });
}

/** The sample whose indeterminates of development were recorded as this in the first place. */
function recorded(as: string): Sample {
  return { ...sample, bad: sample['bad'].map((value, row) => (value === 'i' && sample['part'][row] === 'dev' ? as : value)) };
}

/** Indeterminates weigh twice and more, so that their weight is seen in every figure. */
const weighted: Sample = { ...sample, weight: sample['bad'].map((value, row) => String((value === 'i' ? 2 : 0.5) + (row % 3) / 4)) };

describe('the fit with indeterminates as good and as bad', () => {
  it.each([
    ['as good', '0'],
    ['as bad', '1'],
  ] as const)('%s equals the weighted fit of a file that says so', (reading, value) => {
    const weight = { column: 'weight' };
    const found = refits(weighted, { weight })?.at.find(({ index }) => index === 1)?.cases.find(({ indeterminates }) => indeterminates === reading);
    const { result } = replay({
      specification: specificationOf({ characteristics, weight, fit: { ...fit, lambda: { value: 0.005 } } }),
      specificationSha256: '0'.repeat(64),
      dataSha256: '0'.repeat(64),
      source: sourceOfSample({ ...recorded(value), weight: weighted['weight'] }),
      version: '1',
    });
    expect(found).toMatchObject({ kept: result.kept, converged: true });
    expect(found?.gini).toBeCloseTo(gini(result.metrics.holdOut?.auc ?? NaN), 9);
    expect(found?.rankCorrelation).toBeLessThan(1);
  });

  it.each([
    ['as good', '0'],
    ['as bad', '1'],
  ] as const)('%s equals the fit of a file that says so', (reading, value) => {
    const found = refits(sample)?.at.find(({ index }) => index === 1)?.cases.find(({ indeterminates }) => indeterminates === reading);
    const { result, prepared } = replay({
      specification: specificationOf({ characteristics, fit: { ...fit, lambda: { value: 0.005 } } }),
      specificationSha256: '0'.repeat(64),
      dataSha256: '0'.repeat(64),
      source: sourceOfSample(recorded(value)),
      version: '1',
    });
    expect(found).toMatchObject({ goods: prepared.counts.development.goods, bads: prepared.counts.development.bads, kept: result.kept, converged: true });
    expect(found?.gini).toBeCloseTo(gini(result.metrics.holdOut?.auc ?? NaN), 9);
  });

  it('holds each reading against the fit as it is defined, at every place asked for', () => {
    const found = refits(sample, {}, 0.7);
    expect(found).toMatchObject({ partition: 'holdOut', approvalRate: 0.7 });
    expect(found?.at.map(({ index, lambda }) => [index, lambda])).toEqual([
      [0, 0.05],
      [1, 0.005],
    ]);
    const [own, good, bad] = found!.at[1].cases;
    expect(own).toMatchObject({ rankCorrelation: 1, decisionsChanged: 0 });
    expect(good.goods - own.goods).toBe(bad.bads - own.bads);
    expect(good.goods).toBeGreaterThan(own.goods);
    for (const { rankCorrelation, decisionsChanged: changed } of [good, bad]) {
      expect(rankCorrelation).toBeGreaterThan(0.9);
      expect(rankCorrelation).toBeLessThan(1);
      expect(changed).toBeLessThan(0.2);
    }
    // Few distinct scores: a limit between two of them changes nobody, one within moves some.
    const moved = [0.3, 0.4, 0.5, 0.6].flatMap((rate) => refits(sample, {}, rate)!.at[1].cases.map((one) => one.decisionsChanged ?? NaN));
    expect(Math.max(...moved)).toBeGreaterThan(0);
    expect(Math.max(...moved)).toBeLessThan(0.2);
  });

  it('takes development where there is no hold-out, and nothing where nobody is indeterminate', () => {
    const partition = { column: 'part', development: ['dev', 'test'], holdOut: [] };
    expect(refits(sample, { partition })?.partition).toBe('development');
    expect(refits(recorded('0'))).toBeNull();
  });
});

describe('decisions changed at the same approval rate', () => {
  it('counts who changes sides, and shares ties out alike', () => {
    expect(decisionsChanged(Float64Array.of(1, 2, 3, 4), Float64Array.of(1, 3, 2, 4), 0.5)).toBe(0.5);
    const tied = Float64Array.of(1, 1, 1, 1);
    expect(decisionsChanged(tied, tied, 0.3)).toBe(0);
    // Half of four equal applicants against the two highest: each of the four differs by a half.
    expect(decisionsChanged(tied, Float64Array.of(1, 2, 3, 4), 0.5)).toBe(0.5);
    for (const rate of [0, 1]) expect(decisionsChanged(Float64Array.of(1, 2), Float64Array.of(2, 1), rate)).toBe(0);
  });
  it('is 0 without applicants', () => expect(decisionsChanged(new Float64Array(0), new Float64Array(0), 0.5)).toBe(0));
});
