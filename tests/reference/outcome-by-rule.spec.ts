import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Result } from '@tallystone/contracts/result/types';
import { expect, it } from 'vitest';
import { csvOf, inventedSample, specificationOf } from '../../server/src/replay/invented-sample';
import { builtPath } from '../support/built-server';

/**
 * An outcome by rule, replayed from the raw file by the command, against the same outcome worked out here and written into a column of texts: the two
 * results are one. The sample is invented; the rule is data of this test, not a finding.
 */
it('a rule on days past due and months on book replays from the raw file to what its values in a column give', () => {
  const sample = inventedSample(1200, 5);
  const days = sample['bad'].map((bad, row) => String(bad === '1' ? 90 + (row % 200) : bad === 'i' ? 30 + (row % 60) : row % 30));
  const months = days.map((_, row) => (row % 29 === 0 ? '' : String(6 + (row % 19))));
  const outcome = days.map((text, row) => {
    if (months[row] === '' || Number(months[row]) < 9) return 'out';
    return Number(text) >= 90 ? 'bad' : Number(text) >= 30 ? 'between' : 'good';
  });
  const csv = csvOf({ ...sample, dpd: days, months, outcome });
  const byRule = {
    daysPastDue: { column: 'dpd', bad: 90, indeterminate: 30, missing: 'excluded' },
    monthsOnBook: { column: 'months', least: 9 },
  };
  const byValues = { column: 'outcome', good: ['good'], bad: ['bad'], indeterminate: ['between'], excluded: ['out'] };
  const partition = { seed: 4, holdOutShare: 0.3, outOfTime: { column: 'applied_on', from: '2025-11-01' } };
  const folder = mkdtempSync(join(tmpdir(), 'tallystone-rule-'));
  try {
    const place = (name: string): string => join(folder, name);
    writeFileSync(place('sample.csv'), csv);
    const replayed = (name: string, stated: object): Result => {
      writeFileSync(place(`${name}.json`), JSON.stringify(specificationOf({ outcome: stated, partition })));
      const args = [
        '--specification',
        place(`${name}.json`),
        '--data',
        place('sample.csv'),
        '--out',
        place(`${name}-result.json`),
      ];
      execFileSync(process.execPath, [builtPath('cli/replicate'), ...args], { encoding: 'utf8' });
      return JSON.parse(readFileSync(place(`${name}-result.json`), 'utf8')) as Result;
    };
    const [ruled, valued] = [replayed('rule', byRule), replayed('values', byValues)];
    const { development, excluded } = ruled.counts;
    expect(development.bads).toBeGreaterThan(20);
    expect(development.indeterminates).toBeGreaterThan(0);
    expect(excluded).toEqual([{ reason: 'excluded by outcome', rows: outcome.filter((text) => text === 'out').length, bads: 0 }]);
    expect({ ...ruled, specificationSha256: '' }).toEqual({ ...valued, specificationSha256: '' });
  } finally {
    rmSync(folder, { recursive: true });
  }
}, 60_000);
