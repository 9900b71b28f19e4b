import { execFile } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { resultSchema } from '@tallystone/contracts/result/schema';
import type { Result, ResultMetrics } from '@tallystone/contracts/result/types';
import { parseSpecification } from '@tallystone/contracts/specification/schema';
import { readForReplay } from '../../server/src/reading/index';
import { evaluateFit, evaluatorOf, replay } from '../../server/src/replay/index';
import { build } from 'esbuild';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { E2e, E2eFit, E2eMetrics } from './end-to-end';
import { expected, expectNear, Table } from './reference-files';

/**
 * The whole line from a raw file to a result, through a specification and the command line as a process of its own.
 *
 * Source: expected/german_end_to_end.json, computed with numpy; coefficients also by R glmnet 4.1-6, AUC and its error by R pROC, KS by R
 * ks.test. Data: Statlog German Credit (H. Hofmann 1994, UCI 144). Tolerances are the file's own, tightened where both sides are exact.
 * There the fitted event is bad: intercept, coefficients and the limit change sign.
 */
const reference = expected<E2e>('german_end_to_end.json');
const root = fileURLToPath(new URL('../..', import.meta.url));
const names = Object.keys(reference.bins);
let folder = '';
let data = '';
let command = '';

/** The reference splits by row number; a specification splits by a column, so the column is added. */
beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'tallystone-replicate-'));
  data = join(folder, 'german.csv');
  command = join(folder, 'replicate.mjs');
  await build({
    entryPoints: [join(root, 'server/src/cli/replicate.ts')],
    outfile: command,
    bundle: true,
    platform: 'node',
    format: 'esm',
    target: 'node20',
    absWorkingDir: root,
    banner: { js: "import { createRequire } from 'node:module'; const require = createRequire(import.meta.url);" },
  });
  const lines = readFileSync(new URL('data/german_credit.csv', import.meta.url), 'utf8')
    .trimEnd()
    .split('\n');
  const rows = lines.slice(1).map((line, index) => `${line},${[7, 8, 9].includes((index + 1) % 10) ? 'test' : 'train'}`);
  writeFileSync(data, `${[`${lines[0]},part`, ...rows].join('\n')}\n`);
});

afterAll(() => rmSync(folder, { recursive: true, force: true }));

function specificationOf(fit: E2eFit, more: object = {}): object {
  return {
    format: 'tallystone-specification',
    formatVersion: 1,
    outcome: { column: 'bad', good: ['0'], bad: ['1'] },
    partition: { column: 'part', development: ['train'], holdOut: ['test'] },
    characteristics: names.map((column) => {
      const { spec } = reference.bins[column];
      const limit = fit.fit.upper0 === true ? { lower: 0 } : {};
      return spec.type === 'numeric'
        ? { column, kind: 'numeric', edges: spec.edges, closed: spec.closed, ...limit }
        : { column, kind: 'categorical', groups: spec.groups, ...limit };
    }),
    woe: { smoothing: 0, when: 'never' },
    fit: { mixing: fit.fit.alpha, standardize: fit.fit.standardize, lambda: { value: fit.fit.lambda } },
    scaling: { pointsToDouble: reference.pdo, baseScore: reference.score, baseOdds: reference.odds },
    bands: fit.psi_score.edges,
    ...more,
  };
}

/** The command is bundled once, as the product's build does it, and then run as a process of its own. */
function replicate(...args: string[]): Promise<{ code: number; out: string; err: string }> {
  return new Promise((resolve) => {
    execFile(process.execPath, [command, ...args], { cwd: root }, (error, out, err) => {
      resolve({ code: error === null ? 0 : typeof error.code === 'number' ? error.code : -1, out, err });
    });
  });
}

async function resultOf(specification: object, ...more: string[]): Promise<Result> {
  const [spec, out] = [join(folder, 'spec.json'), join(folder, 'result.json')];
  writeFileSync(spec, JSON.stringify(specification));
  const run = await replicate('--specification', spec, '--data', data, '--out', out, ...more);
  expect(run.err).toBe('');
  expect(run.code).toBe(0);
  return resultSchema.parse(JSON.parse(readFileSync(out, 'utf8')));
}

/** sum (a - e) ln(a / e) over the bands that are not empty, written out. */
function stabilityOf(from: readonly number[], to: readonly number[]): number {
  const share = (counts: readonly number[], band: number): number => counts[band] / counts.reduce((sum, count) => sum + count, 0);
  return from.reduce((sum, count, band) => {
    if (count === 0 && to[band] === 0) return sum;
    return sum + (share(to, band) - share(from, band)) * Math.log(share(to, band) / share(from, band));
  }, 0);
}

/** Upper tail of chi-square for an even number of degrees of freedom, in closed form (Abramowitz and Stegun 26.4.21, from memory). */
function evenChiSquareTail(statistic: number, degrees: number): number {
  let term = Math.exp(-statistic / 2);
  let sum = term;
  for (let k = 1; k < degrees / 2; k++) {
    term *= statistic / 2 / k;
    sum += term;
  }
  return sum;
}

function expectMetrics(metrics: ResultMetrics | null, wanted: E2eMetrics, degreesOfFreedom: number, what: string): void {
  if (metrics === null) throw new Error(`${what} has no metrics`);
  expectNear(metrics.auc, wanted.auc, 1e-9, `${what} AUC`);
  expectNear(metrics.gini, wanted.gini, 2e-9, `${what} Gini`);
  expectNear(metrics.aucStandardError ?? NaN, wanted.auc_se_delong, 1e-9, `${what} DeLong`);
  expectNear(metrics.ks, wanted.ks, 1e-9, `${what} KS`);
  expectNear(metrics.brier, wanted.brier, 1e-7, `${what} Brier`);
  expectNear(metrics.logLoss, wanted.logloss, 1e-7, `${what} log loss`);
  expectNear(metrics.hosmerLemeshow?.statistic ?? NaN, wanted.hl_quantile10.chi2, 1e-4, `${what} HL`);
  expect(metrics.hosmerLemeshow?.groups).toBe(wanted.hl_quantile10.groups);
  // The file uses G - 2 everywhere; here G on rows that are not development, so its p-value is made again.
  expect(metrics.hosmerLemeshow?.degreesOfFreedom).toBe(degreesOfFreedom);
  expectNear(
    metrics.hosmerLemeshow?.pValue ?? NaN,
    evenChiSquareTail(wanted.hl_quantile10.chi2, degreesOfFreedom),
    1e-5,
    `${what} HL p`,
  );
  expectNear(metrics.calibrationInTheLarge ?? NaN, wanted.calibration_in_the_large, 1e-6, `${what} in the large`);
  expectNear(metrics.calibrationSlope ?? NaN, wanted.calibration_slope.slope, 1e-6, `${what} slope`);
  expectNear(metrics.calibrationIntercept ?? NaN, wanted.calibration_slope.intercept, 1e-6, `${what} intercept`);
  expectNear(metrics.meanScore, wanted.mean_score, 1e-5, `${what} mean score`);
  expectNear(metrics.aucRounded ?? NaN, wanted.auc_rounded_score, 1e-12, `${what} AUC of the rounded score`);
}

describe.each(reference.fits.map((fit, index) => ({ index, fit })))('fit $index', ({ fit }) => {
  let result: Result;
  beforeAll(async () => {
    result = await resultOf(specificationOf(fit));
  });

  it('has the sample', () => {
    expect(result.counts.development).toMatchObject({
      rows: reference.n_train,
      bads: 215,
      goods: 485,
      indeterminates: 0,
      weight: 700,
    });
    expect(result.counts.holdOut).toMatchObject({ rows: reference.n_test, bads: 85 });
    expect(result.counts.outOfTime.rows).toBe(0);
    expect(result.metrics.outOfTime).toBeNull();
  });

  it('has counts, weight of evidence, information value and stability of every characteristic', () => {
    result.characteristics.forEach((characteristic) => {
      const wanted = reference.bins[characteristic.column];
      expectNear(characteristic.informationValue ?? NaN, wanted.iv, 1e-12, `IV of ${characteristic.column}`);
      expectNear(characteristic.csi.holdOut ?? NaN, wanted.csi_train_test, 1e-10, `CSI of ${characteristic.column}`);
      // The missing bin always exists, here without rows.
      expect(characteristic.bins.at(-1)).toMatchObject({ label: 'missing', rows: 0, woe: 0 });
      expect(characteristic.bins).toHaveLength(wanted.table.length + 1);
      wanted.table.forEach((bin, index) => {
        expect(characteristic.bins[index].goods).toBe(bin.good);
        expect(characteristic.bins[index].bads).toBe(bin.bad);
        expectNear(characteristic.bins[index].woe, bin.woe, 1e-12, `WOE of ${characteristic.column}, ${bin.label}`);
      });
    });
  });

  it('has intercept, coefficients and objective', () => {
    expectNear(result.intercept, -fit.intercept, 1e-8, 'intercept');
    result.characteristics.forEach(({ column, coefficient }) => expectNear(coefficient ?? NaN, -fit.coef[column], 1e-8, column));
    expect(result.characteristics.filter(({ coefficient }) => coefficient !== 0).map(({ column }) => column)).toEqual(
      fit.nonzero,
    );
    expect(result.kept).toBe(fit.nonzero.length);
    expectNear(result.objective, fit.objective, 1e-12, 'objective');
    expect(result.optimalityResidual).toBeLessThanOrEqual(1e-9);
    expect(result.converged).toBe(true);
  });

  it('has points in the spread form, rounded and not', () => {
    expectNear(result.basePoints, fit.base_points_A, 1e-6, 'base points');
    for (const [column, points] of Object.entries(fit.points)) {
      const characteristic = result.characteristics.find((one) => one.column === column);
      points.B.forEach((value, index) => expectNear(characteristic?.bins[index].points ?? NaN, value, 1e-6, column));
      expect(characteristic?.bins.slice(0, -1).map((bin) => bin.pointsRounded)).toEqual(points.B_rounded);
    }
  });

  it('has all metrics on both parts', () => {
    expectMetrics(result.metrics.development, fit.metrics.train, 8, 'development');
    expectMetrics(result.metrics.holdOut, fit.metrics.test, 10, 'hold-out');
  });

  it('has bands and their stability', () => {
    expect(result.bands.map((band) => band.development.rows)).toEqual(fit.psi_score.train_counts);
    expect(result.bands.map((band) => band.holdOut.rows)).toEqual(fit.psi_score.test_counts);
    expect(result.bands.map((band) => ({ n: band.holdOut.rows, bad: band.holdOut.bads }))).toEqual(fit.test_band_table);
    // The file has null where a band is empty on both sides; here such a band adds nothing.
    const { train_counts, test_counts } = fit.psi_score;
    const psi: number | null = fit.psi_score.psi;
    expectNear(result.psi.holdOut ?? NaN, psi ?? stabilityOf(train_counts, test_counts), 1e-10, 'PSI');
    expect(result.psi.outOfTime).toBeNull();
  });

  it('has tenths of development, points in the base form and the scores of rows', async () => {
    const parsed = parseSpecification(
      specificationOf(fit, { bands: null, scaling: { pointsToDouble: 20, baseScore: 600, baseOdds: 50, intercept: 'base' } }),
    );
    if ('problems' in parsed) throw new Error(JSON.stringify(parsed.problems));
    const { specification } = parsed;
    const { source, sha256 } = await readForReplay(data, specification);
    const replayed = replay({ specification, specificationSha256: '0'.repeat(64), dataSha256: sha256, source, version: '0' });
    const tenths = fit.psi_score_train_deciles;
    replayed.result.bands
      .slice(0, -1)
      .forEach((band, index) => expectNear(band.to ?? NaN, tenths.edges_type7[index], 1e-5, 'edge'));
    expect(replayed.result.bands.map((band) => band.holdOut.rows)).toEqual(tenths.test_counts);
    for (const [column, points] of Object.entries(fit.points)) {
      const characteristic = replayed.result.characteristics.find((one) => one.column === column);
      points.A.forEach((value, index) => expectNear(characteristic?.bins[index].points ?? NaN, value, 1e-6, column));
    }
    const { trained, terms, model } = replayed.fitted;
    const spread = { ...specification, scaling: { ...specification.scaling, intercept: 'spread' as const } };
    const evaluator = evaluatorOf(spread, replayed.prepared, replayed.coded, trained.tables);
    const { scores } = evaluateFit(evaluator, terms, model);
    // An edge can be a score that several applicants have (fit 2: three). The file's bands are closed above, these below, so that those
    // applicants, and no others, are one band higher here.
    const development = replayed.result.bands.map((band) => band.development.rows);
    tenths.edges_type7.forEach((_, index) => {
      const sum = (counts: readonly number[]): number => counts.slice(0, index + 1).reduce((total, count) => total + count, 0);
      const tied = scores.development.scores.filter((score) => score === replayed.result.bands[index].to).length;
      expect(sum(development), `up to edge ${index}`).toBe(sum(tenths.train_counts) - tied);
    });
    expectNear(
      replayed.result.psi.holdOut ?? NaN,
      stabilityOf(development, tenths.test_counts),
      1e-12,
      'PSI of tenths, written out',
    );
    if (development.join() === tenths.train_counts.join())
      expectNear(replayed.result.psi.holdOut ?? NaN, tenths.psi, 1e-10, 'PSI of tenths');
    for (const wanted of fit.first_test_rows) {
      const place = evaluator.partitions.holdOut.rows.indexOf(wanted.row - 1);
      expectNear(scores.holdOut.eta[place], -wanted.eta, 1e-7, `row ${wanted.row}`);
      expectNear(scores.holdOut.scores[place], wanted.score, 1e-5, `row ${wanted.row}`);
      expect(scores.holdOut.rounded?.[place]).toBe(wanted.rounded_score);
    }
  });
});

describe('the command', () => {
  it('replays itself exactly, and by the second solver within 1e-6 with equal points', { timeout: 120_000 }, async () => {
    const [lasso] = reference.fits;
    const specification = specificationOf(lasso, {
      fit: {
        mixing: [0.5, 1],
        lambda: { count: 30, smallestRatio: 0.001 },
        choose: 'one-standard-error',
        folds: { count: 5, seed: 1, classing: 'woe' },
      },
      woe: { smoothing: 0.5, when: 'zero-cell' },
    });
    const first = await resultOf(specification);
    expect(first.crossValidation?.lambda).toHaveLength(first.path.length);
    const earlier = join(folder, 'earlier.json');
    writeFileSync(earlier, JSON.stringify(first));
    expect(await resultOf(specification, '--expect', earlier)).toEqual(first);
    const second = await resultOf(specification, '--expect', earlier, '--method', 'independent');
    expect(second.solver.name).not.toBe(first.solver.name);
    expect(second.optimalityResidual).not.toBe(first.optimalityResidual);
    await resultOf(specification, '--method', 'independent');
  });

  it('exits 2 and names each number that differs', async () => {
    const specification = specificationOf(reference.fits[0]);
    const first = await resultOf(specification);
    const altered = structuredClone(first);
    altered.characteristics[2].bins[1].pointsRounded += 1;
    altered.intercept *= 1 + 1e-8;
    const earlier = join(folder, 'altered.json');
    writeFileSync(earlier, JSON.stringify(altered));
    const run = await replicate(
      '--specification',
      join(folder, 'spec.json'),
      '--data',
      data,
      '--out',
      join(folder, 'again.json'),
      '--expect',
      earlier,
    );
    expect(run.code).toBe(2);
    const lines = run.err.trimEnd().split('\n');
    expect(lines).toHaveLength(2);
    expect(lines[0]).toMatch(/^characteristics\[2\]\.bins\[1\]\.pointsRounded: expected/);
    expect(lines[1]).toMatch(/^intercept: expected/);
  });

  it('exits 1 with one line per problem, of the specification, the file and the arguments', async () => {
    const spec = join(folder, 'broken.json');
    const out = join(folder, 'never.json');
    writeFileSync(
      spec,
      JSON.stringify({ ...specificationOf(reference.fits[0]), surplus: 1, woe: { when: 'sometimes' }, cutOff: 'high' }),
    );
    const broken = await replicate('--specification', spec, '--data', data, '--out', out);
    expect(broken.code).toBe(1);
    expect(
      broken.err
        .trimEnd()
        .split('\n')
        .map((line) => line.split(':')[0])
        .sort(),
    ).toEqual(['cutOff', 'surplus', 'woe.when']);

    const ragged = join(folder, 'ragged.csv');
    writeFileSync(ragged, 'a,a\n1\n"2\n');
    writeFileSync(spec, JSON.stringify(specificationOf(reference.fits[0])));
    const unread = await replicate('--specification', spec, '--data', ragged, '--out', out);
    expect(unread.code).toBe(1);
    expect(unread.err).toContain('Columns 1 and 2 are both called "a"');
    expect(unread.err).toContain('A quote is opened on line 3 and never closed.');
    expect(unread.err).toContain('The file has no column "checking".');

    const nothing = await replicate('--specification', spec);
    expect(nothing.code).toBe(1);
    expect(nothing.err.trimEnd().split('\n')).toHaveLength(2);
  });

  it('knows the file a specification belongs to', async () => {
    const spec = join(folder, 'other.json');
    writeFileSync(spec, JSON.stringify(specificationOf(reference.fits[0], { data: { sha256: 'a'.repeat(64) } })));
    const run = await replicate('--specification', spec, '--data', data, '--out', join(folder, 'never.json'));
    expect(run.code).toBe(1);
    expect(run.err).toMatch(/^The specification belongs to the file with SHA-256 a{64}/);
  });
});

it('reads the same data as the other reference checks', () => {
  expect(new Table('data/german_credit.csv').length).toBe(reference.n_train + reference.n_test);
});
