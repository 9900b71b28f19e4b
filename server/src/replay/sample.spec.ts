import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { codeCharacteristics } from './coding';
import { inventedSample, specificationOf, sourceOfSample, type Sample } from './invented-sample';
import { prepare } from './prepare';
import { ReplayError } from './problems';
import { sourceOf, type ColumnSource } from './source';
import { BAD, DEVELOPMENT, GOOD, HOLD_OUT, INDETERMINATE, NO_BIN, NO_OUTCOME, OUT_OF_TIME } from './types';

const sha = (text: string): string => createHash('sha256').update(text, 'utf8').digest('hex');
const sample = inventedSample(900);
const source = sourceOfSample(sample);

function problemsOf(work: () => unknown): ReplayError['problems'] {
  try {
    work();
  } catch (error) {
    if (error instanceof ReplayError) return error.problems;
    throw error;
  }
  throw new Error('nothing was refused');
}

describe('exclusions', () => {
  const small: Sample = {
    age: ['17', '25', '', '40', 'NA', '-999'],
    channel: ['staff', 'web', 'staff', 'web', 'branch', 'web'],
    day: ['2025-01-01', '2025-06-01', '', '2025-12-31T10:00', '2025-07-01', '2024-02-29'],
    bad: ['1', '0', '0', '1', '0', '1'],
    part: ['d', 'd', 'd', 'd', 'd', 'd'],
  };
  const taken = (exclusions: object[]): number[] => {
    const definition = specificationOf({ exclusions, partition: { column: 'part', development: ['d'] } });
    return Array.from(prepare(definition, sourceOf(small), { allowUnfittable: true }).exclusion);
  };

  it('take a row out at the first rule that matches, and count its bads', () => {
    const exclusions = [
      { reason: 'staff', column: 'channel', in: ['staff'] },
      { reason: 'young', column: 'age', below: 18 },
      { reason: 'no age', column: 'age', missing: true },
    ];
    expect(taken(exclusions)).toEqual([1, 0, 1, 0, 3, 2]);
    const spec = specificationOf({ exclusions, partition: { column: 'part', development: ['d'] } });
    expect(prepare(spec, sourceOf(small)).counts.excluded).toEqual([
      { reason: 'staff', rows: 2, bads: 1 },
      { reason: 'young', rows: 1, bads: 1 },
      { reason: 'no age', rows: 1, bads: 0 },
    ]);
  });

  it('combine tests, and a missing value passes none but its own', () => {
    expect(
      taken([
        {
          reason: 'x',
          any: [
            { column: 'age', atLeast: 40 },
            {
              all: [
                { column: 'channel', in: ['staff'] },
                { column: 'age', missing: false },
              ],
            },
          ],
        },
      ]),
    ).toEqual([1, 0, 0, 1, 0, 0]);
    expect(taken([{ reason: 'x', column: 'age', notIn: ['17'] }])).toEqual([0, 1, 0, 1, 0, 1]);
    expect(taken([{ reason: 'x', column: 'age', above: 17, atMost: 25 }])).toEqual([0, 1, 0, 0, 0, 0]);
    expect(taken([{ reason: 'x', column: 'day', atLeast: '2025-06-01', below: '2025-12-31' }])).toEqual([0, 1, 0, 0, 1, 0]);
  });

  it('refuse to compare what is not comparable, naming values and counts', () => {
    const [problem] = problemsOf(() => taken([{ reason: 'x', column: 'channel', below: 3 }]));
    expect(problem).toMatchObject({ code: 'not-comparable', where: { column: 'channel', count: 6 } });
    expect(problem.where.values?.[0]).toEqual({ value: 'web', rows: 3 });
  });
});

describe('outcome, weight and partition', () => {
  it('report every problem of all steps at once, with values and counts', () => {
    const broken = {
      ...sample,
      bad: sample['bad'].map((value, row) => (row < 5 ? '' : row < 7 ? 'maybe' : value)),
      w: sample['w'].map((value, row) => (row === 10 ? '-1' : value)),
    };
    const spec = specificationOf({
      weight: { column: 'w' },
      partition: { column: 'part', development: ['dev'] },
      exclusions: [{ reason: 'x', column: 'nowhere', in: ['a'] }],
    });
    const problems = problemsOf(() => prepare(spec, sourceOf(broken)));
    expect(problems.map((problem) => problem.code)).toEqual([
      'missing-column',
      'unlisted-outcome',
      'bad-weight',
      'unlisted-partition',
    ]);
    expect(problems[1].where.values).toEqual([
      { value: '', rows: 5 },
      { value: 'maybe', rows: 2 },
    ]);
    expect(problems[1].where.count).toBe(7);
  });

  it('reconcile: every row is excluded, declined or counted in one partition', () => {
    const spec = specificationOf({
      declined: { column: 'decision', values: ['declined'], method: 'none' },
      exclusions: [{ reason: 'branch 3', column: 'branch', in: ['b3'] }],
      outcome: { column: 'bad', good: ['0'], bad: ['1'], excluded: ['i'] },
    });
    const { counts } = prepare(spec, source);
    const { development, holdOut, outOfTime, excluded, declined } = counts;
    const all = development.rows + holdOut.rows + outOfTime.rows + declined + excluded.reduce((sum, one) => sum + one.rows, 0);
    expect(all).toBe(900);
    expect(excluded.map((one) => one.reason)).toEqual(['branch 3', 'excluded by outcome']);
    expect(declined).toBe(sample['decision'].filter((text, row) => text === 'declined' && sample['branch'][row] !== 'b3').length);
  });

  it('come from days past due and months on book by rule', () => {
    const file = {
      dpd: ['0', '29', '30', '89', '90', '400', '', '95', '0', '31'],
      months: ['12', '30', '12', '12', '12', '12', '12', '11', '3', ''],
      part: new Array<string>(10).fill('d'),
    };
    const by = (missing: string, more: object = {}) => ({
      partition: { column: 'part', development: ['d'] },
      outcome: { daysPastDue: { column: 'dpd', bad: 90, indeterminate: 30, missing }, monthsOnBook: { column: 'months', least: 12 } },
      ...more,
    });
    const { outcome, counts } = prepare(specificationOf(by('excluded')), sourceOf(file));
    expect([...outcome]).toEqual([GOOD, GOOD, INDETERMINATE, INDETERMINATE, BAD, BAD, ...new Array<number>(4).fill(NO_OUTCOME)]);
    expect(counts.excluded).toEqual([{ reason: 'excluded by outcome', rows: 4, bads: 0 }]);
    // Missing days and missing months are each told; a row that is excluded for few months needs no days.
    expect(problemsOf(() => prepare(specificationOf(by('refuse')), sourceOf(file))).map(({ code, where }) => [code, where.column, where.count])).toEqual([
      ['no-days-past-due', 'dpd', 1],
      ['no-months-on-book', 'months', 1],
    ]);
    // -999 is a code and no number of days: it is never good.
    const coded = { ...file, dpd: file.dpd.map((text) => (text === '' ? '-999' : text)) };
    expect(problemsOf(() => prepare(specificationOf(by('excluded')), sourceOf(coded)))[0]).toMatchObject({
      code: 'no-days-past-due',
      where: { values: [{ value: '-999', rows: 1 }] },
    });
    // What an exclusion takes out is counted by the rule too, and a declined row has no outcome.
    const excluding = by('excluded', { exclusions: [{ reason: 'very late', column: 'dpd', atLeast: 400 }] });
    expect(prepare(specificationOf(excluding), sourceOf(file)).counts.excluded[0]).toEqual({ reason: 'very late', rows: 1, bads: 1 });
    const decided = { ...file, decision: file.dpd.map((text) => (text === '' ? 'declined' : 'accepted')) };
    const declining = by('excluded', { declined: { column: 'decision', values: ['declined'], method: 'none' } });
    expect(prepare(specificationOf(declining), sourceOf(decided)).counts.declined).toBe(1);
  });

  it('blocks a fit on one class', () => {
    const spec = specificationOf({ outcome: { column: 'bad', good: ['0', '1'], bad: ['none'], indeterminate: ['i'] } });
    expect(problemsOf(() => prepare(spec, source))[0].code).toBe('one-class');
    expect(prepare(spec, source, { allowUnfittable: true }).counts.development.bads).toBe(0);
  });

  it('draws hold-out by SHA-256 of seed:row, goods and bads apart, after out-of-time', () => {
    const spec = specificationOf({
      partition: { seed: 7, holdOutShare: 0.3, outOfTime: { column: 'applied_on', from: '2025-11-01', to: null } },
    });
    const { partition, outcome } = prepare(spec, source);
    const inTime = Array.from(partition.keys()).filter((row) => sample['applied_on'][row] < '2025-11-01');
    expect(Array.from(partition.keys()).filter((row) => partition[row] === OUT_OF_TIME)).toEqual(
      Array.from(partition.keys()).filter((row) => !inTime.includes(row)),
    );
    for (const kind of [GOOD, BAD]) {
      const rows = inTime.filter((row) => outcome[row] === kind);
      const drawn = [...rows]
        .sort((a, b) => (sha(`7:${a + 1}`) < sha(`7:${b + 1}`) ? -1 : 1))
        .slice(0, Math.round(0.3 * rows.length));
      expect(rows.filter((row) => partition[row] === HOLD_OUT)).toEqual(drawn.sort((a, b) => a - b));
    }
  });
});

describe('hold-out by groups', () => {
  const spec = specificationOf({
    declined: { column: 'decision', values: ['declined'], method: 'none' },
    partition: { seed: 7, holdOutShare: 0.3, groups: 'branch', outOfTime: { column: 'applied_on', from: '2025-11-01', to: null } },
  });

  it('keeps a group in one partition, whole, in the order of SHA-256 of seed:value', () => {
    const { partition, outcome } = prepare(spec, source);
    const rows = Array.from(partition.keys()).filter((row) => partition[row] === DEVELOPMENT || partition[row] === HOLD_OUT);
    const known = (row: number): boolean => outcome[row] <= GOOD;
    const wanted = Math.round(0.3 * rows.filter(known).length);
    const names = [...new Set(rows.map((row) => sample['branch'][row]))].sort((a, b) => (sha(`7:${a}`) < sha(`7:${b}`) ? -1 : 1));
    const held = new Set<string>();
    let taken = 0;
    for (const name of names) {
      if (taken >= wanted) break;
      held.add(name);
      taken += rows.filter((row) => known(row) && sample['branch'][row] === name).length;
    }
    expect(held.size).toBeGreaterThan(3);
    for (const row of rows) expect(partition[row] === HOLD_OUT, sample['branch'][row]).toBe(held.has(sample['branch'][row]));
    // Declined and indeterminate rows go with their group.
    expect(rows.some((row) => !known(row) && partition[row] === HOLD_OUT)).toBe(true);
    expect(taken).toBeGreaterThanOrEqual(wanted);
  });

  it('asks for a group in every row that is drawn from', () => {
    const branch = sample['branch'].map((text, row) => (row < 3 ? '' : text));
    expect(problemsOf(() => prepare(spec, sourceOf({ ...sample, branch })))[0]).toMatchObject({ code: 'missing-group', where: { column: 'branch' } });
  });
});

describe('groups by their first row', () => {
  const partition = { seed: 7, holdOutShare: 0.3, groups: 'branch', groupsBy: 'first-row', outOfTime: null };
  const fit = { mixing: 1, lambda: { value: 0.01 }, folds: { count: 3, seed: 3, groups: 'branch', groupsBy: 'first-row' } };
  const spec = specificationOf({ partition, fit });

  it('are drawn in the order of SHA-256 of seed:row, of the first row of the whole file', () => {
    const { partition, outcome } = prepare(spec, source);
    const first = (name: string): number => sample['branch'].indexOf(name) + 1;
    const names = [...new Set(sample['branch'])].sort((a, b) => (sha(`7:${first(a)}`) < sha(`7:${first(b)}`) ? -1 : 1));
    const known = (row: number): boolean => outcome[row] <= GOOD;
    const rowsOf = (name: string): number[] => Array.from(outcome.keys()).filter((row) => sample['branch'][row] === name && known(row));
    const wanted = Math.round(0.3 * names.flatMap(rowsOf).length);
    let taken = 0;
    for (const name of names) {
      const held = taken < wanted;
      for (const row of rowsOf(name)) expect(partition[row], name).toBe(held ? HOLD_OUT : DEVELOPMENT);
      if (held) taken += rowsOf(name).length;
    }
    expect(taken).toBeGreaterThanOrEqual(wanted);
  });

  it('are the same whatever the groups are called', () => {
    const names = [...new Set(sample['branch'])];
    const renamed = new Map(names.map((name, place) => [name, name === '' ? '' : sha(`${name}${place}`)]));
    const hashed = { ...sample, branch: sample['branch'].map((name) => renamed.get(name) ?? '') };
    const [clear, kept] = [prepare(spec, source), prepare(spec, sourceOf(hashed))];
    expect(kept.partition).toEqual(clear.partition);
    expect(kept.folds).toEqual(clear.folds);
    // Drawn by value they are not.
    const byValue = specificationOf({ partition: { ...partition, groupsBy: 'value' } });
    expect(prepare(byValue, sourceOf(hashed)).partition).not.toEqual(prepare(byValue, source).partition);
  });
});

describe('folds', () => {
  const foldsOf = (folds: object, more: object = {}) =>
    prepare(specificationOf({ fit: { mixing: 1, lambda: { value: 0.01 }, folds }, ...more }), source);

  it('deal goods then bads in the order of SHA-256 of seed:fold:row', () => {
    const { folds, outcome, partition } = foldsOf({ count: 5, seed: 3 });
    for (const kind of [GOOD, BAD]) {
      const rows = Array.from(outcome.keys()).filter((row) => outcome[row] === kind && partition[row] === DEVELOPMENT);
      rows.sort((a, b) => (sha(`3:fold:${a + 1}`) < sha(`3:fold:${b + 1}`) ? -1 : 1));
      rows.forEach((row, place) => expect(folds?.[row]).toBe((place % 5) + 1));
    }
  });

  it('keep a group together, each to the lightest fold so far, in key order', () => {
    const { folds, outcome, partition, weights } = foldsOf({ count: 3, seed: 3, groups: 'branch' }, { weight: { column: 'w' } });
    const load = [0, 0, 0];
    const names = [...new Set(sample['branch'])].sort((a, b) => (sha(`3:fold:${a}`) < sha(`3:fold:${b}`) ? -1 : 1));
    for (const name of names) {
      const rows = Array.from(outcome.keys()).filter(
        (row) => sample['branch'][row] === name && outcome[row] <= GOOD && partition[row] === DEVELOPMENT,
      );
      if (rows.length === 0) continue;
      const lightest = load.indexOf(Math.min(...load));
      rows.forEach((row) => expect(folds?.[row], name).toBe(lightest + 1));
      load[lightest] += rows.reduce((sum, row) => sum + (weights?.[row] ?? 0), 0);
    }
  });

  it('come from a column in ascending order, and need at least two', () => {
    const { folds, foldCount, outcome, partition } = foldsOf({ column: 'fold' });
    expect(foldCount).toBe(4);
    const row = Array.from(outcome.keys()).find((one) => outcome[one] <= GOOD && partition[one] === DEVELOPMENT) ?? 0;
    expect(folds?.[row]).toBe(Number(sample['fold'][row]));
    expect(
      problemsOf(() =>
        prepare(specificationOf({ fit: { mixing: 1, lambda: { value: 0.01 }, folds: { column: 'part' } } }), source),
      )[0].code,
    ).toBe('fold-count');
  });
});

describe('bin codes', () => {
  const values: Sample = {
    x: ['25', '24.99', '', '-999', '-999.0', '37', 'NA', '1e2'],
    c: ['owner', 'rent', '', 'unknown', 'castle', 'other', 'owner', 'rent'],
    bad: ['0', '1', '0', '1', '0', '1', '0', '1'],
    part: new Array<string>(8).fill('dev'),
  };
  const codes = (characteristic: object, columns: ColumnSource = sourceOf(values)): number[] => {
    const spec = specificationOf({ characteristics: [characteristic] });
    return Array.from(codeCharacteristics(spec, columns, prepare(spec, columns)).characteristics[0].codes ?? []);
  };
  const special = [{ label: 'none', values: [-999], bin: 'own' }];

  it('hold closure, specials as doubles, missing in a bin of its own', () => {
    expect(codes({ column: 'x', kind: 'numeric', edges: [25, 37], special })).toEqual([1, 0, 4, 3, 3, 2, 4, 2]);
    expect(codes({ column: 'x', kind: 'numeric', edges: [25, 37], special, closed: 'right' })).toEqual([0, 0, 4, 3, 3, 1, 4, 2]);
  });

  it('take codes in words among numbers, to the letter, from texts and beside a column of numbers', () => {
    const words = [{ label: 'none', values: [-999, 'NTC'], bin: 'own' }, { label: 'thin file', values: ['thin'], bin: 0 }];
    const characteristic = { column: 'x', kind: 'numeric', edges: [25, 37], special: words };
    const x = ['25', 'NTC', '', '-999', 'thin', '37', 'NA', 'NTC'];
    expect(codes(characteristic, sourceOf({ ...values, x }))).toEqual([1, 3, 4, 3, 0, 2, 4, 3]);
    const numbers: ColumnSource = {
      rows: 8,
      column: (name) =>
        name === 'x'
          ? { kind: 'numbers', values: Float64Array.of(25, NaN, NaN, -999, NaN, 37, NaN, NaN), exceptions: new Map([[1, 'NTC'], [4, 'thin'], [6, 'NA'], [7, 'NTC']]) }
          : sourceOf(values).column(name),
    }; // prettier-ignore
    expect(codes(characteristic, numbers)).toEqual([1, 3, 4, 3, 0, 2, 4, 3]);
    // Any other word is a problem, in small letters too; and so is a code that is a number as this file is read.
    expect(problemsOf(() => codes(characteristic, sourceOf({ ...values, x: x.map((text) => text.replace('NTC', 'ntc')) })))).toMatchObject([{ code: 'not-a-number' }]);
    const french = { ...characteristic, special: [{ label: 'none', values: ['1 000'], bin: 'own' }] };
    const spec = specificationOf({ characteristics: [french], data: { sha256: null, delimiter: ',', encoding: 'utf-8', decimal: '.', thousands: ' ', trim: true, missing: ['', 'NA'] } });
    expect(problemsOf(() => codeCharacteristics(spec, sourceOf(values), prepare(spec, sourceOf(values))))).toMatchObject([{ code: 'special-is-number' }]);
  });

  it('let special, missing and unseen join a bin', () => {
    expect(codes({ column: 'x', kind: 'numeric', edges: [25, 37], special: [{ ...special[0], bin: 2 }], missing: 0 })).toEqual([
      1, 0, 0, 2, 2, 2, 0, 2,
    ]);
    const groups = [['owner'], ['rent', 'other']];
    expect(codes({ column: 'c', kind: 'categorical', groups })).toEqual([0, 1, 2, NO_BIN, NO_BIN, 1, 0, 1]);
    expect(
      codes({
        column: 'c',
        kind: 'categorical',
        groups,
        unseen: 1,
        missing: 0,
        special: [{ label: 'u', values: ['unknown'], bin: 'own' }],
      }),
    ).toEqual([0, 1, 0, 2, 1, 1, 0, 1]);
  });

  it('are the same from a column of numbers as from texts', () => {
    const numbers: ColumnSource = {
      rows: 8,
      column: (name) =>
        name === 'x'
          ? {
              kind: 'numbers',
              values: Float64Array.of(25, 24.99, NaN, -999, -999, 37, NaN, 100),
              exceptions: new Map([[6, 'NA']]),
            }
          : sourceOf(values).column(name),
    };
    const characteristic = { column: 'x', kind: 'numeric', edges: [25, 37], special };
    expect(codes(characteristic, numbers)).toEqual(codes(characteristic));
  });

  it('refuse what is no number and refused missing values, of all characteristics at once', () => {
    const spec = specificationOf({
      characteristics: [
        { column: 'c', kind: 'numeric', edges: [1] },
        { column: 'x', kind: 'numeric', edges: [1], missing: 'refuse' },
      ],
    });
    const problems = problemsOf(() => codeCharacteristics(spec, sourceOf(values), prepare(spec, sourceOf(values))));
    expect(problems.map((problem) => [problem.code, problem.where.column, problem.where.count])).toEqual([
      ['not-a-number', 'c', 7],
      ['refused-missing', 'x', 2],
    ]);
  });

  it('ignore rows that are out', () => {
    const dirty = { ...values, x: values['x'].map((text, row) => (row === 1 ? 'oops' : text)) };
    const spec = specificationOf({
      characteristics: [{ column: 'x', kind: 'numeric', edges: [25] }],
      exclusions: [{ reason: 'x', column: 'x', in: ['oops'] }],
    });
    const columns = sourceOf(dirty);
    expect(codeCharacteristics(spec, columns, prepare(spec, columns)).characteristics[0].codes?.[1]).toBe(NO_BIN);
  });
});
