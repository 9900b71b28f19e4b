import { describe, expect, it } from 'vitest';
import { challenge, FOREIGN_TOLERANCE } from './challenge';
import { AGE, HOME, INCOME, inventedSample, sourceOfSample, specificationOf } from './invented-sample';
import { replay } from './replay';

const none = '0'.repeat(64);

function challenged(more: object, rows = 1200) {
  const source = sourceOfSample(inventedSample(rows));
  return challenge(
    replay({ specification: specificationOf(more), specificationSha256: none, dataSha256: none, source, version: '1' }),
  );
}

const nearlyUnpenalised = { mixing: 1, lambda: { value: 1e-4 } };

describe('the challenge to a model', () => {
  it('has the foreign library find the same unpenalised fit of what is kept', () => {
    const { foreign, varianceInflation, conditionIndex } = challenged({
      characteristics: [AGE, HOME, INCOME],
      fit: nearlyUnpenalised,
    });
    if ('unavailable' in foreign) throw new Error(foreign.unavailable);
    expect(foreign.rows).toBe(foreign.of);
    expect(foreign.coefficients.map(({ column }) => column)).toEqual(varianceInflation.map(({ column }) => column));
    expect(foreign.largestDifference).toBeLessThanOrEqual(FOREIGN_TOLERANCE);
    expect(foreign.largestDifference).toBeGreaterThan(0);
    for (const { value } of varianceInflation) expect(value).toBeGreaterThanOrEqual(1);
    expect(conditionIndex).toBeGreaterThanOrEqual(1);
  });

  it('takes every k-th row of a development too large for it, and says so', () => {
    const { foreign } = challenged({ characteristics: [AGE, HOME], fit: nearlyUnpenalised }, 16_000);
    if ('unavailable' in foreign) throw new Error(foreign.unavailable);
    expect(foreign.of).toBeGreaterThan(5000);
    expect(foreign.rows).toBe(Math.ceil(foreign.of / Math.ceil(foreign.of / 5000)));
    expect(foreign.largestDifference).toBeLessThanOrEqual(FOREIGN_TOLERANCE);
  });

  it('says why there is none: weights, nothing kept', () => {
    expect(challenged({ characteristics: [AGE], fit: nearlyUnpenalised, weight: { column: 'w' } }).foreign).toEqual({
      unavailable: 'The foreign library takes no weights.',
    });
    const nothing = challenged({ characteristics: [AGE], fit: { mixing: 1, lambda: { value: 10 } } });
    expect(nothing).toEqual({
      varianceInflation: [],
      conditionIndex: null,
      foreign: { unavailable: 'No characteristic is kept.' },
    });
  });
});
