import { describe, expect, it } from 'vitest';
import { partitionWords } from './partition';

describe('a partition in words', () => {
  it('names the seed and the share, what is kept together and the period', () => {
    expect(partitionWords({ seed: 7, holdOutShare: 0.3, outOfTime: null })).toBe('seed 7, 30 % hold-out');
    expect(partitionWords({ seed: 0, holdOutShare: 0.125, outOfTime: { column: 'applied_on', from: '2026-01-01', to: null }, groups: 'household' })).toBe(
      'seed 0, 12.5 % hold-out, groups of household kept together, out-of-time by applied_on from 2026-01-01',
    );
    expect(partitionWords({ seed: 1, holdOutShare: 0, outOfTime: { column: 'applied_on', from: null, to: '2026-03-31' } })).toBe(
      'seed 1, 0 % hold-out, out-of-time by applied_on to 2026-03-31',
    );
  });
  it('names the column that states it', () => {
    expect(partitionWords({ column: 'part', development: ['d'], holdOut: ['h'], outOfTime: [] })).toBe('by the values of part');
  });
});
