import { describe, expect, it } from 'vitest';
import {
  assignBins,
  auc,
  brier,
  calibration,
  countBins,
  delong,
  fitAt,
  hosmerLemeshow,
  impactRatios,
  kolmogorovSmirnov,
  logLoss,
  optimalityResidual,
  pairedDelong,
  populationStability,
  probabilitiesOfBad,
  probabilityOfBad,
  quantileType7,
  scaleToPoints,
  spiegelhalter,
  varianceInflation,
  weightOfEvidence,
  type Fit,
  type FitProblem,
} from '@tallystone/numeric';
import { binsOf, binCount, type BinSpec } from './german-bins';
import type { E2e, E2eFit, E2eMetrics } from './end-to-end';
import { tableOf } from './penalised-fits';
import { expectAllRead, expectNear, expected } from './reference-files';

// Source: expected/german_end_to_end.json: numpy, checked against glmnet 4.1-6, pROC 1.18 and R's ks.test; two independent programs agree to 1e-11.
const reference = expected<E2e>('german_end_to_end.json');
const raw = tableOf('data/german_credit.csv');
const outcome = raw.goods('bad');
const isTest = (i: number): boolean => [7, 8, 9].includes((i + 1) % 10);
const train = Array.from(outcome.keys()).filter((i) => !isTest(i));
const test = Array.from(outcome.keys()).filter(isTest);
const names = Object.keys(reference.bins);
const pick = <T>(values: ArrayLike<T>, rows: readonly number[]): T[] => rows.map((i) => values[i]);

const characteristics = names.map((column) => {
  const spec: BinSpec = reference.bins[column].spec;
  const bins = binsOf(raw, column, spec);
  const counts = countBins(pick(bins, train), pick(outcome, train), binCount(spec));
  return { column, bins, counts, evidence: weightOfEvidence(counts.goods, counts.bads, { amount: 0, when: 'never' }) };
});
const coded = characteristics.map(({ bins, evidence }) => Float64Array.from(bins, (bin) => evidence.woe[bin]));
const columns = coded.map((column) => Float64Array.from(pick(column, train)));
const trainOutcome = Uint8Array.from(pick(outcome, train));
const testOutcome = Uint8Array.from(pick(outcome, test));

/** ln(good:bad) as a sum of table values in a fixed order, so that equal bins tie exactly. */
function etaOf(intercept: number, coefficients: ArrayLike<number>, rows: readonly number[]): Float64Array {
  return Float64Array.from(rows, (i) => coded.reduce((sum, column, j) => sum + coefficients[j] * column[i], intercept));
}

describe('bins and weights of evidence on the training rows', () => {
  it.each(characteristics)('$column', ({ column, bins, counts, evidence }) => {
    const wanted = reference.bins[column];
    const tested = countBins(pick(bins, test), pick(outcome, test), counts.rows.length);
    wanted.table.forEach((bin, i) => {
      expect([counts.goods[i], counts.bads[i], tested.rows[i]]).toEqual([bin.good, bin.bad, bin.n_test]);
      expectNear(evidence.woe[i], bin.woe, 1e-12, bin.label);
      expectNear(evidence.parts[i], bin.iv, 1e-12, bin.label);
    });
    expectNear(evidence.informationValue, wanted.iv, 1e-12);
    expectNear(populationStability(counts.rows, tested.rows) ?? NaN, wanted.csi_train_test, 1e-10);
  });

  it('has the split and the variance inflation factors', () => {
    expect([train.length, test.length]).toEqual([reference.n_train, reference.n_test]);
    const bads = (own: Uint8Array): number => own.reduce((sum, y) => sum + 1 - y, 0);
    expect([bads(trainOutcome), bads(testOutcome)]).toEqual([reference.bads_train, reference.bads_test]);
    const inflation = varianceInflation(columns);
    names.forEach((name, j) => expectNear(inflation[j], reference.vif_train_classical[name], 1e-9, name));
  });
});

const problemOf = (wanted: E2eFit): FitProblem => ({
  columns,
  outcome: trainOutcome,
  penalty: {
    mixing: wanted.fit.alpha,
    standardize: wanted.fit.standardize,
    // The reference limits the effect on bad from above.
    lower: wanted.fit.upper0 === true ? new Float64Array(names.length) : undefined,
  },
});

// Tighter than the default: AUC and the counts behind Hosmer-Lemeshow hang on the order of near ties.
const fitOf = (wanted: E2eFit): Fit => fitAt(problemOf(wanted), wanted.fit.lambda, { tolerance: 1e-11 });

function checkMetrics(
  eta: Float64Array,
  own: Uint8Array,
  wanted: E2eMetrics,
  development: boolean,
  factor: number,
  offset: number,
): void {
  const pd = probabilitiesOfBad(eta);
  // AUC, KS and Gini to 1e-9, Brier and logarithmic loss to 1e-7, Hosmer-Lemeshow to 1e-4: as the file states.
  const area = delong(eta, own);
  expectNear(auc(eta, own), wanted.auc, 1e-9, 'AUC');
  expectNear(2 * area.auc - 1, wanted.gini, 1e-9, 'Gini');
  expectNear(area.standardError, wanted.auc_se_delong, 1e-9, 'DeLong');
  expectNear(area.lower, wanted.auc_ci95_delong[0], 1e-9, 'lower');
  expectNear(area.upper, wanted.auc_ci95_delong[1], 1e-9, 'upper');
  const ks = kolmogorovSmirnov(eta, own);
  expectNear(ks.ks, wanted.ks, 1e-9, 'KS');
  // The file names the last PD below the cut, this library the last score below it: neighbours on its two sides.
  const above = eta.reduce((least, value) => (value > ks.at && value < least ? value : least), Infinity);
  expectNear(probabilityOfBad(above), wanted.ks_at_p_bad, 1e-8, 'PD at KS');
  expectNear(offset + factor * above, wanted.ks_at_score, 1e-4, 'score at KS');
  // Sums in another order can part what is equal in one of them by a last digit: compared at ten decimals, as the file is.
  expect(new Set(eta.map((value) => Math.round(value * 1e10))).size).toBe(wanted.distinct_eta);
  expectNear(brier(pd, own), wanted.brier, 1e-7, 'Brier');
  expectNear(logLoss(pd, own), wanted.logloss, 1e-7, 'logarithmic loss');
  const hl = hosmerLemeshow(pd, own, { groups: 10, development });
  expectNear(hl.statistic, wanted.hl_quantile10.chi2, 1e-4, 'Hosmer-Lemeshow');
  expect(hl.groups).toBe(wanted.hl_quantile10.groups);
  expect(hl.table.map((group) => [group.rows, group.bads])).toEqual(
    wanted.hl_quantile10.table_n_obs_exp.map(([n, bads]) => [n, bads]),
  );
  hl.table.forEach((group, g) => expectNear(group.expectedBads, wanted.hl_quantile10.table_n_obs_exp[g][2], 1e-6, `group ${g}`));
  // The file counts G - 2 everywhere; the p-value for G - 2 is compared, whichever this project takes for the part.
  const twoLess = hosmerLemeshow(pd, own, { groups: 10, development: true });
  expect(twoLess.degreesOfFreedom).toBe(wanted.hl_quantile10.df);
  expectNear(twoLess.pValue ?? NaN, wanted.hl_quantile10.p_value, 1e-5, 'p-value');
  expect(hl.degreesOfFreedom).toBe(development ? hl.groups - 2 : hl.groups);
  const line = calibration(pd, own);
  expectNear(line.inTheLarge, wanted.calibration_in_the_large, 1e-7, 'in the large');
  expectNear(line.slope, wanted.calibration_slope.slope, 1e-7, 'slope');
  expectNear(line.intercept, wanted.calibration_slope.intercept, 1e-7, 'intercept');
  expectNear(line.slopeStandardError, wanted.calibration_slope.se_slope, 1e-7, 'error of the slope');
  expectNear(line.meanPd, wanted.mean_p, 1e-7, 'mean PD');
  expectNear(line.badRate, wanted.bad_rate, 1e-12, 'bad rate');
  expectNear(spiegelhalter(pd, own).z, wanted.spiegelhalter_z, 1e-6, 'Spiegelhalter');
  const scores = eta.map((value) => offset + factor * value);
  expectNear(scores.reduce((sum, score) => sum + score, 0) / scores.length, wanted.mean_score, 1e-4, 'mean score');
}

reference.fits.forEach((wanted, index) => {
  describe(`fit ${index}: ${JSON.stringify(wanted.fit)}`, () => {
    const fit = fitOf(wanted);
    const etaTrain = etaOf(fit.intercept, fit.coefficients, train);
    const etaTest = etaOf(fit.intercept, fit.coefficients, test);
    const kept = names.flatMap((_, j) => (fit.coefficients[j] !== 0 ? [j] : []));
    const terms = kept.map((j) => ({ coefficient: fit.coefficients[j], woe: characteristics[j].evidence.woe }));
    const scaling = {
      pointsToDouble: reference.pdo,
      baseScore: reference.score,
      baseOdds: reference.odds,
      rounding: 'nearest',
    } as const;
    const base = scaleToPoints({ ...scaling, intercept: 'base' }, { intercept: fit.intercept, terms });
    const spread = scaleToPoints({ ...scaling, intercept: 'spread' }, { intercept: fit.intercept, terms });
    const scoreTest = etaTest.map((eta) => base.offset + base.factor * eta);
    const scoreTrain = etaTrain.map((eta) => base.offset + base.factor * eta);

    it('has the coefficients', () => {
      expect(fit.status).toBe('converged');
      expect(kept.map((j) => names[j])).toEqual(wanted.nonzero);
      expectNear(fit.intercept, -wanted.intercept, 1e-8);
      names.forEach((name, j) => expectNear(fit.coefficients[j], -wanted.coef[name], 1e-8, name));
      expectNear(fit.objective, wanted.objective, 1e-10);
      const theirs = {
        lambda: wanted.fit.lambda,
        intercept: -wanted.intercept,
        coefficients: Float64Array.from(names, (name) => -wanted.coef[name]),
      };
      expect(optimalityResidual(problemOf(wanted), theirs)).toBeLessThanOrEqual(wanted.kkt_max + 1e-12);
    });

    it('has the points in base and spread form, and rounded', () => {
      expectNear(base.factor, wanted.factor, 1e-10);
      expectNear(base.offset, wanted.offset, 1e-10);
      expectNear(base.basePoints, wanted.base_points_A, 1e-4);
      kept.forEach((j, k) => {
        const points = wanted.points[names[j]];
        points.A.forEach((value, bin) => expectNear(base.points[k][bin], value, 1e-4, `${names[j]} ${points.labels[bin]}`));
        points.B.forEach((value, bin) => expectNear(spread.points[k][bin], value, 1e-4, `${names[j]} ${points.labels[bin]}`));
        expect(spread.pointsRounded[k]).toEqual(points.B_rounded);
      });
      wanted.first_test_rows.forEach((row) => {
        const place = test.indexOf(row.row - 1);
        expectNear(etaTest[place], -row.eta, 1e-7, 'eta');
        expectNear(probabilityOfBad(etaTest[place]), row.p_bad, 1e-7, 'PD');
        expectNear(scoreTest[place], row.score, 1e-4, 'score');
        const rounded = kept.reduce((sum, j, k) => sum + spread.pointsRounded[k][characteristics[j].bins[row.row - 1]], 0);
        expect(rounded).toBe(row.rounded_score);
      });
    });

    it('has the metrics on the training rows', () =>
      checkMetrics(etaTrain, trainOutcome, wanted.metrics.train, true, base.factor, base.offset));
    it('has the metrics on the test rows', () =>
      checkMetrics(etaTest, testOutcome, wanted.metrics.test, false, base.factor, base.offset));

    it('has the AUC of the rounded score', () => {
      const rounded = (rows: readonly number[]): number[] =>
        rows.map((i) => kept.reduce((sum, j, k) => sum + spread.pointsRounded[k][characteristics[j].bins[i]], 0));
      expectNear(auc(rounded(train), trainOutcome), wanted.metrics.train.auc_rounded_score, 1e-9);
      expectNear(auc(rounded(test), testOutcome), wanted.metrics.test.auc_rounded_score, 1e-9);
    });

    it('has the bands, their stability and the cut-off figures', () => {
      const band = (scores: Float64Array, edges: number[]) => assignBins(scores, edges, 'right');
      const { psi_score: fixed, psi_score_train_deciles: deciles } = wanted;
      const inTrain = countBins(band(scoreTrain, fixed.edges), trainOutcome, fixed.edges.length + 1);
      const inTest = countBins(band(scoreTest, fixed.edges), testOutcome, fixed.edges.length + 1);
      expect([...inTrain.rows]).toEqual(fixed.train_counts);
      expect([...inTest.rows]).toEqual(fixed.test_counts);
      expect(wanted.test_band_table).toEqual([...inTest.rows].map((n, b) => ({ n, bad: inTest.bads[b] })));
      const index = populationStability(inTrain.rows, inTest.rows) ?? NaN;
      if (fixed.psi === null) {
        // The file has no value when a band is empty on both sides; here such a band adds 0, so leaving it out changes nothing.
        const filled = (counts: Float64Array): Float64Array => counts.filter((_, b) => inTrain.rows[b] + inTest.rows[b] > 0);
        expect(filled(inTrain.rows).length).toBeLessThan(inTrain.rows.length);
        expect(index).toBe(populationStability(filled(inTrain.rows), filled(inTest.rows)));
      } else expectNear(index, fixed.psi, 1e-10);
      const cuts = deciles.edges_type7.map((_, d) => quantileType7(scoreTrain, (d + 1) / 10));
      cuts.forEach((cut, d) => expectNear(cut, deciles.edges_type7[d], 1e-4));
      const byTenth = [scoreTrain, scoreTest].map(
        (scores, k) => countBins(band(scores, cuts), k === 0 ? trainOutcome : testOutcome, 10).rows,
      );
      expect(byTenth.map((rows) => [...rows])).toEqual([deciles.train_counts, deciles.test_counts]);
      expectNear(populationStability(byTenth[0], byTenth[1]) ?? NaN, deciles.psi, 1e-10);
      const approved = test.filter((_, k) => scoreTest[k] >= 600);
      expect(approved).toHaveLength(wanted.cutoff_at_600.approved_test);
      expect(approved.filter((i) => outcome[i] === 0)).toHaveLength(wanted.cutoff_at_600.bad_among_approved);
      const age = raw.numbers('age');
      const rate = (young: boolean): number => {
        const group = test.flatMap((i, k) => (age[i] <= 25 === young ? [scoreTest[k]] : []));
        expect(group).toHaveLength(young ? wanted.adverse_impact.n_group : wanted.adverse_impact.n_reference);
        return group.filter((score) => score >= wanted.adverse_impact.cutoff).length / group.length;
      };
      expectNear(rate(true), wanted.adverse_impact.rate_group, 1e-12);
      expectNear(rate(false), wanted.adverse_impact.rate_reference, 1e-12);
      expectNear(impactRatios([rate(false), rate(true)])[1].ratio, wanted.adverse_impact.ratio, 1e-12);
    });
  });
});

it('tests fit 0 against fit 1 on the test rows as pROC does', () => {
  const scores = [0, 1].map((k) => {
    const fit = fitOf(reference.fits[k]);
    return etaOf(fit.intercept, fit.coefficients, test);
  });
  const paired = pairedDelong(scores[0], scores[1], testOutcome);
  const wanted = reference.paired_delong_test_fit0_vs_fit1;
  wanted.auc.forEach((value, k) => expectNear(paired.aucs[k], value, 1e-10));
  wanted.cov.forEach((row, a) => row.forEach((value, b) => expectNear(paired.covariance[a][b], value, 1e-10)));
  expectNear(paired.z, wanted.z, 1e-7);
  expectNear(paired.pValue, wanted.p, 1e-7);
});

it('reads every figure of the file', () =>
  expectAllRead('german_end_to_end.json', {
    'fits/*/max_abs_diff_R': 'how well the programs behind the file agree with one another',
    'fits/*/cross_check/*': 'how well the programs behind the file agree with one another',
    'fits/*/metrics/*/hl_rank10/**': 'groups by rank split rows of equal PD, which this library never does',
  }));
