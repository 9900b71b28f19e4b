import { describe, expect, it } from 'vitest';
import { Largest, Report } from './report';

describe('the report of the reference check', () => {
  it('fails a line that is too far, and one that is not a number', () => {
    const report = new Report();
    report.add('near', 'a book', 1e-9, 1e-8);
    report.add('far', 'a book', 1e-7, 1e-8);
    report.add('lost', 'a book', NaN, 1e-8);
    report.notChecked('what is not here');
    expect(report.failed.map(({ check }) => check)).toEqual(['far', 'lost']);
    const lines = report.text().split('\n');
    expect(lines[3]).toMatch(/^\| far +\| a book \| 1\.0e-7 +\| 1e-8 +\| NO +\|$/);
    expect(lines.slice(-2)).toEqual(['Not checked: what is not here', '1 passed, 2 failed']);
  });

  it('keeps the largest distance, and lists of different length are as far as can be', () => {
    const largest = new Largest();
    largest.all([1, 2, 3], [1, 2.5, 3.25]);
    expect(largest.value).toBe(0.5);
    largest.see(Infinity, Infinity);
    expect(largest.value).toBe(0.5);
    largest.see(NaN, 1);
    expect(largest.value).toBeNaN();
    const other = new Largest();
    other.all([1], [1, 1]);
    expect(other.value).not.toBeLessThanOrEqual(1e300);
  });
});
