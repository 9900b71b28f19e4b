import { stringify } from 'csv-stringify/sync';
import { parseSpecification } from '@tallystone/contracts/specification/schema';
import type { Specification } from '@tallystone/contracts/specification/types';
import { sourceOf, type ColumnSource } from './source';

/** An invented sample for the specs beside this file: seeded, with missing, special and unseen values, dates, groups and declined rows. */
export type Sample = Record<string, string[]>;

export function inventedSample(rows: number, seed = 1): Sample {
  let state = seed >>> 0;
  const random = (): number => {
    state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0;
    return state / 2 ** 32;
  };
  const sample: Sample = {
    age: [],
    income: [],
    home: [],
    bad: [],
    decision: [],
    w: [],
    applied_on: [],
    branch: [],
    fold: [],
    part: [],
  };
  for (let row = 0; row < rows; row++) {
    const age = 18 + Math.floor(random() * 50);
    const income = Math.round(500 + random() * 4000) / 2;
    const home = ['owner', 'rent', 'parents', 'other'][Math.floor(random() * 4)];
    const logOdds = 0.5 + (age - 40) / 20 + (income - 1200) / 900 + (home === 'owner' ? 0.7 : 0) - (home === 'other' ? 0.5 : 0);
    const declined = random() < 0.15;
    const bad = random() < 1 / (1 + Math.exp(logOdds)) ? '1' : '0';
    sample['age'].push(random() < 0.05 ? '' : random() < 0.05 ? '-999' : String(age));
    sample['income'].push(random() < 0.04 ? 'NA' : income.toFixed(1));
    sample['home'].push(random() < 0.03 ? 'caravan' : home);
    sample['bad'].push(random() < 0.03 ? 'i' : bad);
    sample['decision'].push(declined ? 'declined' : 'accepted');
    sample['w'].push(String(1 + Math.floor(random() * 3)));
    sample['applied_on'].push(`2025-${String(1 + Math.floor(random() * 12)).padStart(2, '0')}-15`);
    sample['branch'].push(`b${Math.floor(random() * 40)}`);
    sample['fold'].push(String(1 + (row % 4)));
    sample['part'].push(row % 3 === 0 ? 'test' : 'dev');
  }
  return sample;
}

export const AGE = {
  column: 'age',
  kind: 'numeric',
  edges: [25, 35, 50],
  special: [{ label: 'no record', values: [-999], bin: 'own' }],
} as const;
export const INCOME = { column: 'income', kind: 'numeric', edges: [700, 1200, 1700] } as const;
export const HOME = { column: 'home', kind: 'categorical', groups: [['owner'], ['rent'], ['parents', 'other']] } as const;

/** A complete specification of the sample, with keys replaced at the top level. */
export function specificationOf(more: object = {}): Specification {
  const parsed = parseSpecification({
    format: 'tallystone-specification',
    formatVersion: 1,
    outcome: { column: 'bad', good: ['0'], bad: ['1'], indeterminate: ['i'] },
    partition: { column: 'part', development: ['dev'], holdOut: ['test'] },
    characteristics: [AGE, INCOME, HOME],
    fit: { mixing: 1, lambda: { value: 0.005 } },
    ...more,
  });
  if ('problems' in parsed) throw new Error(parsed.problems.map(({ where, message }) => `${where.path}: ${message}`).join('\n'));
  return parsed.specification;
}

export function csvOf(sample: Sample): Buffer {
  const names = Object.keys(sample);
  const rows = sample[names[0]].map((_, row) => names.map((name) => sample[name][row]));
  return Buffer.from(stringify([names, ...rows]));
}

export function sourceOfSample(sample: Sample): ColumnSource {
  return sourceOf(sample);
}

/** The rows of a sample that a test keeps, in order, as often as `times` says. */
export function repeatedRows(sample: Sample, times: (row: number) => number): Sample {
  return Object.fromEntries(
    Object.entries(sample).map(([name, values]) => [
      name,
      values.flatMap((value, row) => new Array<string>(times(row)).fill(value)),
    ]),
  );
}
