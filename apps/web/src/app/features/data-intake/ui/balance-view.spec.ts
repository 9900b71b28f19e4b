import type { BalanceReading, CharacteristicBalance } from '@tallystone/contracts/samples/balance';
import { balanceFinding, byIndex, readingWords } from '@tallystone/contracts/samples/balance-reading';
import { describe, expect, it } from 'vitest';
import { movedMost } from './balance-view';

const reading = (index: number, more: Partial<BalanceReading> = {}): BalanceReading => ({
  rows: 1000,
  index,
  classes: 10,
  smoothed: false,
  criticalValue: 0.02,
  pValue: 0.5,
  largest: { label: 'rent', development: 0.31, compared: 0.24 },
  ...more,
});
const entry = (column: string, holdOut: number, outOfTime: number | null): CharacteristicBalance => ({
  column,
  holdOut: reading(holdOut),
  outOfTime: outOfTime === null ? null : reading(outOfTime),
});

describe('the balance of the partitions', () => {
  it('is read by the usual thresholds and by what chance carries', () => {
    expect(readingWords(reading(0.01))).toBe('below 0.10, within chance');
    expect(readingWords(reading(0.1))).toBe('0.10 to 0.25, more than chance');
    expect(readingWords(reading(0.3, { criticalValue: 0.4, smoothed: true }))).toBe('above 0.25, within chance, smoothed');
    expect(readingWords(null)).toBe('\u2013');
  });
  it('puts the most unlike first and says what moved', () => {
    const list = [entry('age', 0.01, 0.02), entry('home', 0.005, 0.12)];
    expect(byIndex(list).map(({ column }) => column)).toEqual(['home', 'age']);
    expect(movedMost(list[1])).toBe('rent: 24.0\u202f% against 31.0\u202f%');
    const cut = reading(0.2, { largest: { label: '-202 to under 4719', development: 0.1, compared: 0.2 } });
    expect(movedMost({ column: 'balance', holdOut: cut, outOfTime: null })).toMatch(/^\u2212202 to under 4\u202f719: 20/);
  });
  it('opens with what wants a look, else with chance', () => {
    expect(balanceFinding([entry('age', 0.01, 0.3), entry('home', 0.01, 0.12)])).toBe(
      '1 characteristic is spread differently than in development, with an index above 0.25: age.',
    );
    expect(balanceFinding([entry('age', 0.01, 0.2), entry('home', 0.01, 0.12)])).toBe(
      '2 characteristics deserve a look, with an index of 0.10 or more: age, home.',
    );
    expect(balanceFinding([entry('age', 0.01, 0.03), entry('home', 0.01, 0.005)])).toBe(
      'No index reaches 0.10; the largest is 0.030 (age). 1 of 4 indices is more than chance carries, where about 0 would be by chance alone.',
    );
    expect(balanceFinding([entry('age', 0.01, 0.3)], (column) => `Years of ${column}`)).toContain('0.25: Years of age.');
    expect(balanceFinding([{ column: 'age', holdOut: null, outOfTime: null }])).toBe('There is no other partition to compare development with.');
  });
});
