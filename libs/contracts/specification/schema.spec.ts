import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { isIsoDate, parseSpecification, specificationSchema } from './schema';
import type { Specification } from './types';

const least = {
  format: 'tallystone-specification',
  formatVersion: 1,
  outcome: { column: 'bad', good: ['0'], bad: ['1'] },
  partition: { column: 'part', development: ['dev'] },
  characteristics: [
    { column: 'age', kind: 'numeric', edges: [25, 30] },
    { column: 'home', kind: 'categorical', groups: [['owner'], ['rent', 'parents']] },
  ],
  fit: { mixing: 1, lambda: { value: 0.005 } },
};

function accepted(more: object = {}): Specification {
  const parsed = parseSpecification({ ...least, ...more });
  if ('problems' in parsed) throw new Error(JSON.stringify(parsed.problems, null, 1));
  return parsed.specification;
}

function places(more: object, from: object = least): string[] {
  const parsed = parseSpecification({ ...from, ...more });
  return 'problems' in parsed ? parsed.problems.map(({ code, where }) => `${code} ${where.path}`) : [];
}

describe('a specification', () => {
  it('gets its defaults as the format states them', () => {
    expect(accepted()).toEqual({
      ...least,
      title: null,
      data: { sha256: null, delimiter: ',', encoding: 'utf-8', decimal: '.', thousands: null, trim: true, missing: ['', 'NA'] },
      exclusions: [],
      outcome: { ...least.outcome, indeterminate: [], excluded: [] },
      declined: null,
      weight: null,
      priorCorrection: null,
      partition: { column: 'part', development: ['dev'], holdOut: [], outOfTime: [] },
      characteristics: [
        {
          ...least.characteristics[0],
          closed: 'left',
          special: [],
          missing: 'own',
          coding: 'woe',
          penaltyMultiplier: 1,
          lower: null,
          upper: null,
          classing: { made: 'by hand' },
        },
        {
          ...least.characteristics[1],
          special: [],
          missing: 'own',
          unseen: 'neutral',
          coding: 'woe',
          penaltyMultiplier: 1,
          lower: null,
          upper: null,
          classing: { made: 'by hand' },
        },
      ],
      woe: { smoothing: 0.5, when: 'zero-cell' },
      fit: { mixing: 1, lambda: { value: 0.005 }, standardize: true, choose: 'value', folds: null, refit: null },
      recalibration: null,
      scaling: { pointsToDouble: 25, baseScore: 500, baseOdds: 16, intercept: 'spread', rounding: 'nearest' },
      bands: { quantiles: 10 },
      psi: { smoothing: 0 },
      reasons: { baseline: 'mean', most: 4, texts: {} },
      cutOff: null,
    });
    expect(accepted({ bands: null }).bands).toEqual({ quantiles: 10 });
  });

  it('is the same once complete', () => {
    const complete = accepted({
      exclusions: [{ reason: 'x', any: [{ column: 'a', below: 3 }, { all: [{ column: 'd', atLeast: '2025-01-01' }] }] }],
      declined: { column: 'decision', values: ['no'], method: 'parcelling' },
      partition: { seed: 7, holdOutShare: 0.3, outOfTime: { column: 'day', from: '2026-01-01', to: null } },
      fit: { mixing: [0, 1], lambda: { count: 50 }, choose: 'minimum', folds: { count: 5, seed: 1 } },
    });
    expect(parseSpecification(JSON.parse(JSON.stringify(complete)))).toEqual({ specification: complete });
  });

  it('states a date order only where it was given, so that older ones keep their fingerprint', () => {
    expect(accepted().data).not.toHaveProperty('dateOrder');
    expect(accepted({ data: { dateOrder: 'day-month-year' } }).data.dateOrder).toBe('day-month-year');
    expect(accepted().data).not.toHaveProperty('dateTimes');
    expect(accepted({ data: { dateTimes: 'day' } }).data.dateTimes).toBe('day');
    expect(places({ data: { dateTimes: 'hour' } })).toEqual(['invalid-value data.dateTimes']);
    expect(accepted().data).not.toHaveProperty('notDates');
    expect(accepted({ data: { notDates: ['branch_code'] } }).data.notDates).toEqual(['branch_code']);
    expect(places({ data: { notDates: [''] } })).toHaveLength(1);
    expect(places({ data: { notDates: [] } })).toHaveLength(1);
    expect(places({ data: { dateOrder: 'day first' } })).toEqual(['invalid-value data.dateOrder']);
  });

  it('reports every problem at once, each with its place', () => {
    const broken = {
      format: 'tallystone-specification',
      formatVersion: 2,
      extra: 1,
      data: { delimiter: ',,', encoding: 'latin1', decimal: ',', thousands: '.', surplus: true },
      exclusions: [
        { column: 'a', in: ['x'] },
        { reason: 'y', column: 'b' },
        { reason: 'z', any: [{ column: 'c', below: 'soon' }] },
      ],
      outcome: { column: 'bad', good: ['0'] },
      partition: { seed: 1.5, holdOutShare: 1, outOfTime: { column: 'd', from: '2026-02-30' } },
      characteristics: [
        { column: 'age', kind: 'numeric', edges: [30, 25], missing: 7, lower: 1, colour: 'red' },
        { column: 'age', kind: 'categorical', groups: [['a'], ['a']], unseen: 5 },
        { column: 'pay', kind: 'numeric', coding: 'linear' },
        { column: 'q', kind: 'ordinal' },
      ],
      fit: { mixing: 1.5, lambda: { grid: [0.1, 0.2] }, choose: 'best' },
      bands: [3, 2],
    };
    expect(places({}, broken).sort()).toEqual(
      [
        'unknown-key extra',
        'invalid-value formatVersion',
        'invalid-value data.delimiter',
        'invalid-value data.encoding',
        'unknown-key data.surplus',
        'missing-key exclusions[0].reason',
        'no-test exclusions[1]',
        'invalid-value exclusions[2].any[0].below',
        'missing-key outcome.bad',
        'wrong-type partition.seed',
        'out-of-range partition.holdOutShare',
        'invalid-value partition.outOfTime.from',
        'not-ascending characteristics[0].edges[1]',
        'no-such-bin characteristics[0].missing',
        'out-of-range characteristics[0].lower',
        'unknown-key characteristics[0].colour',
        'listed-twice characteristics[1].groups',
        'no-such-bin characteristics[1].unseen',
        'invalid-value characteristics[2].missing',
        'invalid-value characteristics[3].kind',
        'out-of-range fit.mixing',
        'not-descending fit.lambda.grid[1]',
        'invalid-value fit.choose',
        'not-ascending bands[1]',
      ].sort(),
    );
  });

  it('judges what spans keys', () => {
    expect(places({ characteristics: [{ column: 'bad', kind: 'numeric', edges: [1] }] })).toEqual([
      'leaks characteristics[0].column',
    ]);
    expect(places({ characteristics: [least.characteristics[0], least.characteristics[0]] })).toEqual([
      'listed-twice characteristics',
    ]);
    expect(places({ outcome: { column: 'bad', good: ['0'], bad: ['0'] } })).toEqual(['listed-twice outcome']);
    const late = { column: 'dpd', bad: 90, indeterminate: 30 };
    expect(places({ outcome: { daysPastDue: { ...late, indeterminate: 90 } } })).toEqual(['not-ascending outcome.daysPastDue.indeterminate']);
    expect(places({ outcome: { daysPastDue: late, monthsOnBook: { column: 'dpd', least: 12 } } })).toEqual([
      'listed-twice outcome.monthsOnBook.column',
    ]);
    expect(places({ outcome: { daysPastDue: late, column: 'bad' } })).toEqual(['unknown-key outcome.column']);
    expect(places({ outcome: { daysPastDue: late, monthsOnBook: { column: 'age', least: 12 } } })).toEqual(['leaks characteristics[0].column']);
    expect(places({ fit: { mixing: [0, 1], lambda: { value: 1 } } })).toEqual(['needs-rule fit.mixing']);
    expect(places({ fit: { mixing: 1, lambda: { count: 9 }, choose: 'minimum' } })).toEqual(['needs-folds fit.folds']);
    expect(places({ reasons: { baseline: 'cut-off' } })).toEqual(['needs-cut-off reasons.baseline']);
    expect(
      places({
        data: { missing: ['', 'owner', '-9'] },
        characteristics: [
          { ...least.characteristics[0], special: [{ label: 'x', values: [-9], bin: 'own' }] },
          least.characteristics[1],
        ],
      }),
    ).toEqual(['listed-as-missing characteristics[0]', 'listed-as-missing characteristics[1]']);
    expect(
      places({ characteristics: [{ column: 'pay', kind: 'numeric', coding: 'linear', missing: 'refuse', edges: [1] }] }),
    ).toEqual(['unknown-key characteristics[0].edges']);
    expect(
      places({ characteristics: [{ column: 'age', kind: 'numeric', edges: Array.from({ length: 250 }, (_, i) => i) }] }),
    ).toEqual(['too-many-bins characteristics[0]']);
    expect(places({ characteristics: [{ column: '__proto__', kind: 'numeric', edges: [] }] })).toEqual([
      'invalid-value characteristics[0].column',
    ]);
  });

  it('never throws, whatever it is given', () => {
    const keys = Object.keys(accepted());
    const any = fc.jsonValue();
    fc.assert(
      fc.property(any, fc.constantFrom(...keys), any, (whole, key, part) => {
        for (const input of [whole, { ...least, [key]: part }]) {
          const parsed = parseSpecification(input);
          if ('problems' in parsed) {
            expect(parsed.problems.length).toBeGreaterThan(0);
            parsed.problems.forEach((problem) => expect(problem.message).toMatch(/[.?!]$/));
          }
        }
      }),
      { numRuns: 500 },
    );
  });

  it('is a zod schema too, with the same places', () => {
    const parsed = specificationSchema.safeParse({ ...least, fit: { mixing: 2, lambda: { value: 1 } }, cutOff: 'x' });
    expect(parsed.error?.issues.map((issue) => issue.path)).toEqual([['fit', 'mixing'], ['cutOff']]);
    expect(specificationSchema.parse(least)).toEqual(accepted());
  });
});

describe('ISO dates', () => {
  it('name days that exist', () => {
    expect(['2024-02-29', '2000-02-29', '2026-12-31'].every(isIsoDate)).toBe(true);
    expect(
      ['2023-02-29', '1900-02-29', '2026-13-01', '2026-00-10', '2026-04-31', '26-01-01', '2026-1-1', '2026-01-01T00:00'].some(
        isIsoDate,
      ),
    ).toBe(false);
  });
});
