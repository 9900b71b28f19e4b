import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { beforeAll, describe, expect, it } from 'vitest';
import { columns, type Row } from './columns';
import { applications, demoFile, demoRows, dictionaryFile, turn } from './generate';
import { intakeFiles } from './intake/generate';
import { drawsFrom, exponential } from './random';

const sha256 = (bytes: string | Buffer): string => createHash('sha256').update(bytes).digest('hex');
const kept = (name: string): Buffer => readFileSync(new URL(name, import.meta.url));

describe('the demo file', () => {
  let rows: Row[];
  beforeAll(() => {
    rows = demoRows();
  });
  const badRate = (some: Row[]): number =>
    some.filter((row) => row.outcome_12m === 'bad').length /
    some.filter((row) => row.outcome_12m === 'good' || row.outcome_12m === 'bad').length;

  it('is made again byte by byte from its seed', () => {
    expect(sha256(demoFile())).toBe(sha256(kept('saltmarsh-personal-loans.csv')));
    expect(sha256(dictionaryFile())).toBe(sha256(kept('dictionary.csv')));
  });

  it('has its number of applications in order of date over three years, each with its own number', () => {
    expect(rows).toHaveLength(applications);
    const dates = rows.map((row) => row.applied_on);
    expect(dates).toEqual([...dates].sort());
    expect([dates[0] >= '2022-07-01', dates.at(-1)! <= '2025-06-30']).toEqual([true, true]);
    expect(new Set(rows.map((row) => row.application_id)).size).toBe(applications);
  });

  it('knows an outcome for accepted applications and for no other', () => {
    for (const row of rows) expect(row.outcome_12m === '').toBe(row.decision === 'declined');
  });

  it('has the bad rate of a personal-loan book, indeterminates below 10 %, and drifts in the last half-year', () => {
    const known = rows.filter((row) => row.decision === 'accepted' && row.channel !== 'staff');
    const before = known.filter((row) => row.applied_on < turn);
    const after = known.filter((row) => row.applied_on >= turn);
    expect(badRate(before)).toBeGreaterThan(0.08);
    expect(badRate(before)).toBeLessThan(0.12);
    expect(badRate(after) - badRate(before)).toBeGreaterThan(0.01);
    const share = known.filter((row) => row.outcome_12m === 'indeterminate').length / known.length;
    expect(share).toBeGreaterThan(0.02);
    expect(share).toBeLessThan(0.1);
  });

  it('uses each special code that the dictionary names, and only those below zero', () => {
    for (const { column, specialCodes } of columns) {
      const codes = specialCodes.map(({ code }) => code);
      const found = new Set(rows.map((row) => row[column]).filter((value) => /^-99\d$/.test(value)));
      expect([column, [...found].sort()]).toEqual([column, codes.sort()]);
    }
  });
});

describe('the draws', () => {
  it('are those of xoshiro128** from this seed mixing, uniform and normal in their moments', () => {
    const draws = drawsFrom(1);
    const uniforms = Array.from({ length: 50_000 }, draws.uniform);
    const normals = Array.from({ length: 50_000 }, draws.normal);
    const mean = (values: number[]): number => values.reduce((sum, value) => sum + value, 0) / values.length;
    // Bounds are five standard errors of the mean or of the variance at this number of draws.
    expect(Math.abs(mean(uniforms) - 0.5)).toBeLessThan((5 * Math.sqrt(1 / 12)) / Math.sqrt(50_000));
    expect(Math.abs(mean(normals))).toBeLessThan(5 / Math.sqrt(50_000));
    expect(Math.abs(mean(normals.map((value) => value * value)) - 1)).toBeLessThan((5 * Math.SQRT2) / Math.sqrt(50_000));
  });

  it('raise e to a power as well as the engine does', () => {
    for (const power of [-30, -4.2, -0.3, 0, 0.5, 1, 7.7]) expect(exponential(power) / Math.exp(power)).toBeCloseTo(1, 12);
  });
});

describe('the intake files', () => {
  it.each(Object.entries(intakeFiles()))('%s is kept as generated', (name, bytes) => {
    expect(kept(`intake/${name}`).equals(bytes)).toBe(true);
  });

  it('are each described', () => {
    const text = kept('intake/README.md').toString();
    for (const name of Object.keys(intakeFiles())) expect(text).toContain(`\`${name}\``);
  });
});
