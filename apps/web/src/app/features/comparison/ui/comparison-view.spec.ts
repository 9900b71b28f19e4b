import type { ComparedMetrics, PairedTest } from '@tallystone/contracts/comparison/schema';
import { aucText, coefficientText, incumbentFinding, incumbentRows, namedIn, testText } from './comparison-view';

const test = (change: Partial<PairedTest>): PairedTest => ({ fitId: 'b', partition: 'holdOut', difference: 0.0031, pValue: 0.0421, ...change }) as PairedTest;

describe('the words of a comparison', () => {
  it('give a difference with its p-value, and none on rows that both fits were developed on', () => {
    expect(testText(test({}))).toBe('+0.0031, p = 0.042');
    expect(testText(test({ difference: -0.02, pValue: 1e-9 }))).toBe('\u22120.0200, p < 0.001');
    expect(testText(test({ partition: 'development' }))).toBe('+0.0031');
    expect(testText(test({ pValue: null }))).toBe('+0.0031, no test');
    expect(testText(undefined)).toBe('\u2013');
  });

  it('count the names of a long list, and leave a short one', () => {
    expect(namedIn('a, b, c, d, e, f, g')).toBe('7 characteristics');
    expect(namedIn('age, income')).toBeNull();
    expect(namedIn('none')).toBeNull();
  });

  it('hold an incumbent against the fits, and say when it ranks the other way', () => {
    const figures = { rows: 900, missing: 100, bads: 90, auc: 0.7, aucLower: 0.65, aucUpper: 0.75, ks: 0.3, tests: [{ fitId: 'a', difference: 0.05, lower: 0.01, upper: 0.09, pValue: 0.01 }] };
    const incumbent = { column: 'old_score', development: null, holdOut: figures, outOfTime: null };
    expect(incumbentRows(incumbent)).toEqual([{ partition: 'holdOut', cells: ['0.700 (0.650 to 0.750), KS 0.300', '+0.0500, p = 0.010'] }]);
    expect(incumbentFinding(incumbent)).toBe('old_score reaches an AUC of 0.700 on 900 rows of hold-out, 100 rows without the score left out.');
    expect(incumbentFinding({ ...incumbent, holdOut: { ...figures, auc: 0.3, missing: 0 } })).toContain('ranks the other way: its AUC is 0.300 on 900 rows of hold-out.');
    expect(incumbentFinding({ ...incumbent, holdOut: null })).toContain('too few rows');
  });

  it('give AUC with its interval, and tell out of the fit from shrunk to zero', () => {
    expect(aucText({ auc: 0.781, aucLower: 0.77, aucUpper: 0.792 } as ComparedMetrics)).toBe('0.781 (0.770 to 0.792)');
    expect(aucText({ auc: 0.781, aucLower: null, aucUpper: null } as ComparedMetrics)).toBe('0.781');
    expect(aucText(null)).toBe('\u2013');
    expect(coefficientText(null)).toBe('not in fit');
    expect(coefficientText(0)).toBe('0');
    expect(coefficientText(-0.0812)).toBe('\u22120.081');
  });
});
