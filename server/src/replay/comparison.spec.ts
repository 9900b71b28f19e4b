import { createHash } from 'node:crypto';
import type { Result } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readForReplay } from '../reading/index';
import { compareResults, countNumbers, describeDifference, OTHER_METHOD, SAME_METHOD } from './comparison';
import { canonicalJson, fingerprint } from './fingerprint';
import { csvOf, inventedSample, sourceOfSample, specificationOf } from './invented-sample';
import { ReplayError } from './problems';
import { replay } from './replay';

const sample = inventedSample(400);
const none = '0'.repeat(64);
const made = (): ReturnType<typeof replay>['result'] =>
  replay({
    specification: specificationOf(),
    specificationSha256: none,
    dataSha256: none,
    source: sourceOfSample(sample),
    version: '1',
  }).result;

describe('comparison', () => {
  it('finds nothing between equal results and counts what it compared', () => {
    expect(compareResults(made(), made(), SAME_METHOD)).toEqual([]);
    expect(countNumbers({ a: [1, 2, { b: 3 }], c: 'x', d: null })).toBe(3);
  });

  it('is relative above 1, absolute below, exact for whole numbers, texts and null', () => {
    const expected = made();
    const actual = structuredClone(expected);
    actual.basePoints = expected.basePoints * (1 + 0.9e-9);
    actual.objective = expected.objective + 0.9e-9;
    expect(compareResults(expected, actual, SAME_METHOD)).toEqual([]);
    actual.basePoints = expected.basePoints * (1 + 1.1e-9);
    actual.objective = expected.objective + 1.1e-9;
    actual.counts.development.rows += 1;
    actual.characteristics[1].bins[0].label = 'other';
    actual.psi.outOfTime = 0;
    actual.bands.pop();
    actual.solver.name = 'another';
    const paths = compareResults(expected, actual, SAME_METHOD).map((difference) => difference.path);
    expect(paths).toEqual([
      'solver.name',
      'counts.development.rows',
      'characteristics[1].bins[0].label',
      'objective',
      'basePoints',
      'bands.length',
      'psi.outOfTime',
    ]);
    expect(compareResults(expected, actual, OTHER_METHOD).map((difference) => difference.path)).toEqual([
      'counts.development.rows',
      'characteristics[1].bins[0].label',
      'bands.length',
      'psi.outOfTime',
    ]);
    expect(describeDifference({ path: 'lambda', expected: 1, actual: 1.5, difference: 0.5 })).toBe(
      'lambda: expected 1, got 1.5 (differs by 5.000e-1)',
    );
  });

  it('treats large whole numbers as whole numbers', () => {
    const [expected, actual] = [made(), made()];
    expected.counts.development.rows = 5_000_000_000;
    actual.counts.development.rows = 5_000_000_001;
    expect(compareResults(expected, actual, OTHER_METHOD)).toHaveLength(1);
  });
});

describe('fingerprint', () => {
  it('is SHA-256 over RFC 8785 canonical JSON', () => {
    // The numbers are those of RFC 8785, section 3.2.2, and its key order rule 3.2.3 (both from memory).
    const numbers = JSON.parse('[333333333.33333329, 1E30, 4.50, 2e-3, 0.000000000000000000000000001, -0]') as number[];
    const value = {
      numbers,
      '€': 1,
      '\r': 2,
      '1': 3,
      ö: 4,
      b: { d: null, c: true },
    };
    expect(canonicalJson(value)).toBe(
      '{"\\r":2,"1":3,"b":{"c":true,"d":null},"numbers":[333333333.3333333,1e+30,4.5,0.002,1e-27,0],"ö":4,"€":1}',
    );
    expect(fingerprint(value)).toBe(createHash('sha256').update(canonicalJson(value)).digest('hex'));
    expect(() => canonicalJson({ x: NaN })).toThrow();
  });

  it('does not depend on the order of keys', () => {
    fc.assert(
      fc.property(fc.dictionary(fc.string(), fc.jsonValue()), (value) => {
        const turned = Object.fromEntries(Object.entries(value).reverse());
        expect(fingerprint(turned)).toBe(fingerprint(JSON.parse(JSON.stringify(value))));
      }),
      { numRuns: 200 },
    );
  });
});

describe('round trips', () => {
  it('a file of any sample replays as the sample itself does, or is refused alike', async () => {
    const columns = fc.record({
      rows: fc.integer({ min: 1, max: 120 }),
      seed: fc.integer({ min: 1, max: 10_000 }),
      share: fc.constantFrom(0, 0.3),
      mixing: fc.constantFrom(0, 0.5, 1),
      lambda: fc.constantFrom(0.3, 0.02),
      coding: fc.constantFrom('woe', 'indicator'),
    });
    let results = 0;
    await fc.assert(
      fc.asyncProperty(columns, async ({ rows, seed, share, mixing, lambda, coding }) => {
        const invented = inventedSample(rows, seed);
        const specification = specificationOf({
          partition: { seed, holdOutShare: share },
          characteristics: [
            { column: 'age', kind: 'numeric', edges: [30, 45], coding, special: [{ label: 'none', values: [-999], bin: 'own' }] },
            { column: 'home', kind: 'categorical', groups: [['owner'], ['rent', 'parents', 'other']], coding },
          ],
          fit: { mixing, lambda: { value: lambda } },
        });
        const run = (source: Parameters<typeof replay>[0]['source']): unknown => {
          try {
            const { result } = replay({ specification, specificationSha256: none, dataSha256: none, source, version: '1' });
            return JSON.parse(JSON.stringify(result)) as unknown;
          } catch (error) {
            if (error instanceof ReplayError) return error.problems;
            throw error;
          }
        };
        const file = await readForReplay(inOne(csvOf(invented)), specification);
        const direct = run(sourceOfSample(invented));
        expect(run(file.source)).toEqual(direct);
        if (!Array.isArray(direct)) results++;
      }),
      { numRuns: 200 },
    );
    expect(results).toBeGreaterThan(100);
  });

  describe('of a file whose dates have times', () => {
    const days = inventedSample(400);
    const writings = ['2025-MM-15T10:15:00Z', '2025/MM/15', '2025-MM-15 23:59:59.5 -05:00', '2025-MM-15', '15/MM/2025 10:15'];
    const timed = {
      ...days,
      applied_on: days['applied_on'].map((day, row) => writings[row % 5].replace('MM', day.slice(5, 7))),
      batch: days['age'].map((_, row) => (row % 3 === 0 ? '2025-03-04 09:00' : row % 3 === 1 ? '2025-03-04 17:30' : '1900-01-01 00:00')),
    };
    const missing = ['', 'NA', '1900-01-01 00:00'];
    const resultOf = (specification: Specification, source: Parameters<typeof replay>[0]['source']): Result =>
      replay({ specification, specificationSha256: none, dataSha256: none, source, version: '1' }).result;
    const fromFile = async (specification: Specification): Promise<Result> =>
      resultOf(specification, (await readForReplay(inOne(csvOf(timed)), specification)).source);

    it('sees days where they are read as such: in rules, out-of-time and limits', async () => {
      const rules = {
        exclusions: [
          { reason: 'before the policy', column: 'applied_on', below: '2025-02-15' },
          { reason: 'a day of an audit', column: 'applied_on', in: ['2025-06-15'] },
          { reason: 'no batch', column: 'batch', missing: true },
        ],
        partition: { seed: 7, holdOutShare: 0.3, outOfTime: { column: 'applied_on', from: '2025-11-15', to: null } },
      };
      const read = await fromFile(specificationOf({ ...rules, data: { missing, dateOrder: 'day-month-year', dateTimes: 'day' } }));
      const ofDays = { ...timed, applied_on: days['applied_on'], batch: timed.batch.map((text) => (missing.includes(text) ? text : '2025-03-04')) };
      expect(read).toEqual(resultOf(specificationOf({ ...rules, data: { missing } }), sourceOfSample(ofDays)));
      expect(read.counts.excluded[0].rows).toBe(days['applied_on'].filter((day) => day < '2025-02-15').length);
      for (const rows of [read.counts.outOfTime.rows, ...read.counts.excluded.map((one) => one.rows)]) expect(rows).toBeGreaterThan(10);
    });

    it.each([['text'], [undefined]] as const)('sees texts where they stay as they stand: %s', async (dateTimes) => {
      const rules = {
        exclusions: [{ reason: 'entered twice', column: 'applied_on', in: ['2025/06/15', '2025-06-15T10:15:00Z'] }],
        characteristics: [{ column: 'batch', kind: 'categorical', groups: [['2025-03-04 09:00'], ['2025-03-04 17:30']] }],
      };
      const specification = specificationOf({ ...rules, data: { missing, ...(dateTimes && { dateTimes }) } });
      const read = await fromFile(specification);
      expect(read).toEqual(resultOf(specification, sourceOfSample(timed)));
      expect(read.counts.excluded[0].rows).toBe(timed.applied_on.filter((text) => rules.exclusions[0].in.includes(text)).length);
      expect(read.counts.excluded[0].rows).toBeGreaterThan(10);
      // Read as days the same rule takes out nobody.
      const asDays = await fromFile(specificationOf({ ...rules, data: { missing, dateTimes: 'day' } }));
      expect(asDays.counts.excluded[0].rows).toBe(0);
    });
  }); // prettier-ignore
});

async function* inOne(bytes: Buffer): AsyncGenerator<Buffer> {
  yield await Promise.resolve(bytes);
}
