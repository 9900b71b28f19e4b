import { describe, expect, it } from 'vitest';
import {
  Generator,
  auc,
  brier,
  calibration,
  chiSquareTail,
  delong,
  deviance,
  fitAt,
  impactRatios,
  linearPredictor,
  pairedDelong,
  probabilitiesOfBad,
  quantileType7,
  standardErrors,
  stratifiedBootstrap,
  type FitProblem,
} from '@tallystone/numeric';
import { tableOf } from './penalised-fits';
import { expectAllRead, expectNear, expectPrinted, expected } from './reference-files';

describe('DeLong on the aSAH data', () => {
  interface DeLongFile {
    readonly n_event: number;
    readonly n_nonevent: number;
    readonly auc: Record<string, number>;
    readonly var_delong: Record<string, number>;
    readonly cov_delong: Record<string, number>;
    readonly ci95_delong: Record<string, [number, number, number]>;
    readonly paired_test: Record<string, { readonly z: number; readonly p: number; readonly diff_ci95?: [number, number] }>;
  }
  // Source: expected/delong_asah.json: DeLong, DeLong and Clarke-Pearson 1988; data Turck et al. 2010 and figures by Debian r-cran-proc 1.18.0. The
  // figures printed in pROC's documentation (AUC 0.7313686, 0.8236789; |Z| 2.209, p 0.02718) are from memory.
  const file = expected<DeLongFile>('delong_asah.json');
  const table = tableOf('data/asah.csv');
  const outcome = table.goods('poor');
  // Higher is worse in these markers, so a score is their negative.
  const scores = (name: string): Float64Array => table.numbers(name).map((x) => -x);

  it.each(Object.keys(file.auc))('%s', (name) => {
    const own = delong(scores(name), outcome);
    expect([outcome.filter((y) => y === 0).length, outcome.filter((y) => y === 1).length]).toEqual([
      file.n_event,
      file.n_nonevent,
    ]);
    expectNear(own.auc, file.auc[name], 1e-10);
    expectNear(own.auc, file.ci95_delong[name][1], 1e-10);
    expectNear(own.standardError ** 2, file.var_delong[name], 1e-10);
    expectNear(own.lower, file.ci95_delong[name][0], 1e-10);
    expectNear(own.upper, file.ci95_delong[name][2], 1e-10);
  });

  it.each(Object.keys(file.paired_test))('%s', (names) => {
    const [a, b] = names.split('_vs_');
    const own = pairedDelong(scores(a), scores(b), outcome);
    const wanted = file.paired_test[names];
    expectNear(own.covariance[0][1], file.cov_delong[`${a}_${b}`], 1e-10);
    expectNear(own.z, wanted.z, 1e-10);
    expectNear(own.pValue, wanted.p, 1e-10);
    if (wanted.diff_ci95) [own.lower, own.upper].forEach((limit, k) => expectNear(limit, wanted.diff_ci95?.[k] ?? NaN, 1e-10));
  });

  it('has the printed figures', () => {
    const own = pairedDelong(scores('s100b'), scores('wfns'), outcome);
    expectPrinted(own.aucs[0], 0.7313686, 7);
    expectPrinted(own.aucs[1], 0.8236789, 7);
    expectPrinted(Math.abs(own.z), 2.209, 3);
    expectPrinted(own.pValue, 0.02718, 5);
  });
});

describe('Boston mortgage data', () => {
  interface Hmda {
    readonly published: {
      readonly logit: { readonly coef: number[] };
      readonly denial_rate_black: number;
      readonly denial_rate_white: number;
    };
    readonly computed_logit: {
      readonly coef: number[];
      readonly se_model: number[];
      readonly loglik: number;
      readonly deviance: number;
    };
    readonly adverse_impact: {
      readonly counts: Record<'afam' | 'not_afam', { readonly approved: number; readonly denied: number }>;
      readonly approval_rate: Record<'afam' | 'not_afam', number>;
      readonly ratio: number;
      readonly standardised_difference_z_pooled: number;
      readonly chi2_no_correction: number;
      readonly odds_ratio_sample: number;
    };
  }
  // Source: expected/hmda_fairness.json: Stock and Watson, Introduction to Econometrics, chapter 11 (printed figures from memory, reproduced by R); data
  // Munnell et al. 1996 by Debian r-cran-aer. Least squares, probit, robust errors and Fisher's test are not part of this library.
  const file = expected<Hmda>('hmda_fairness.json');
  const table = tableOf('data/hmda.csv');
  const outcome = table.goods('deny');
  const group = Float64Array.from(table.text('afam'), (value) => (value === 'yes' ? 1 : 0));

  it('has the published logit', () => {
    const problem: FitProblem = { columns: [table.numbers('pirat'), group], outcome, penalty: { mixing: 1, standardize: true } };
    const fit = fitAt(problem, 0, { tolerance: 1e-12 });
    const errors = standardErrors(problem, fit);
    [fit.intercept, ...fit.coefficients].forEach((value, j) => {
      expectNear(value, -file.computed_logit.coef[j], 1e-8);
      expectPrinted(value, -file.published.logit.coef[j], 2);
    });
    [errors.intercept, ...errors.coefficients].forEach((value, j) => expectNear(value, file.computed_logit.se_model[j], 1e-8));
    expectNear(fit.deviance, file.computed_logit.deviance, 1e-7);
    const eta = linearPredictor(problem.columns, fit.intercept, fit.coefficients);
    expectNear(-deviance(outcome, eta) / 2, file.computed_logit.loglik, 1e-8);
  });

  it('has the impact ratio and the test of two rates', () => {
    const count = (member: number, good: number): number =>
      group.reduce((sum, g, i) => sum + (g === member && outcome[i] === good ? 1 : 0), 0);
    const { counts, approval_rate, ratio } = file.adverse_impact;
    expect([count(1, 1), count(1, 0), count(0, 1), count(0, 0)]).toEqual([
      counts.afam.approved,
      counts.afam.denied,
      counts.not_afam.approved,
      counts.not_afam.denied,
    ]);
    const own = impactRatios([approval_rate.not_afam, approval_rate.afam]);
    expectNear(counts.afam.approved / (counts.afam.approved + counts.afam.denied), approval_rate.afam, 1e-12);
    expectNear(own[1].ratio, ratio, 1e-12);
    expect(own[1].below).toBe(true);
    expectPrinted(1 - approval_rate.afam, file.published.denial_rate_black, 3);
    expectPrinted(1 - approval_rate.not_afam, file.published.denial_rate_white, 3);
    // An indicator alone reproduces the odds ratio of the 2 x 2 table.
    const alone = fitAt({ columns: [group], outcome, penalty: { mixing: 1, standardize: true } }, 0, { tolerance: 1e-13 });
    expectNear(Math.exp(-alone.coefficients[0]), file.adverse_impact.odds_ratio_sample, 1e-8);
    // z squared is the chi-square without correction; its tail is the two-sided p-value.
    const { standardised_difference_z_pooled: z, chi2_no_correction: chi } = file.adverse_impact;
    const pooled = outcome.reduce((sum, y) => sum + y, 0) / outcome.length;
    const [members, others] = [counts.afam.approved + counts.afam.denied, counts.not_afam.approved + counts.not_afam.denied];
    const own_z = (approval_rate.not_afam - approval_rate.afam) / Math.sqrt(pooled * (1 - pooled) * (1 / members + 1 / others));
    expectNear(own_z, z, 1e-10);
    expectNear(z * z, chi, 1e-10 * chi);
    expect(chiSquareTail(chi, 1)).toBeLessThan(1e-20);
    expect(chiSquareTail(chi, 1)).toBeGreaterThan(0);
  });
});

describe('bootstrap of the unpenalised German credit fit', () => {
  interface Bootstrap {
    readonly optimism_bootstrap: Record<string, number>;
    readonly stratified_auc_bootstrap: {
      readonly B: number;
      readonly auc: number;
      readonly bootstrap_se: number;
      readonly percentile95: [number, number];
      readonly delong_se: number;
    };
  }
  // Source: expected/bootstrap_stochastic.json, numpy; Harrell, Regression Modeling Strategies, 2nd ed. 2015, section 5.3. Stochastic on both sides:
  // within four standard errors of the difference.
  const file = expected<Bootstrap>('bootstrap_stochastic.json');
  const table = tableOf('data/german_credit_woe.csv');
  const columns = table.columns.filter((name) => name !== 'bad').map((name) => table.numbers(name));
  const outcome = table.goods('bad');
  const problem: FitProblem = { columns, outcome, penalty: { mixing: 1, standardize: true } };
  const fit = fitAt(problem, 0);
  const etaOf = (f: { intercept: number; coefficients: Float64Array }): Float64Array =>
    linearPredictor(columns, f.intercept, f.coefficients);
  const eta = etaOf(fit);

  it('stratified bootstrap of the AUC', () => {
    const wanted = file.stratified_auc_bootstrap;
    expectNear(auc(eta, outcome), wanted.auc, 1e-9);
    expectNear(delong(eta, outcome).standardError, wanted.delong_se, 1e-9);
    const count = 2000;
    const areas = Float64Array.from({ length: count }, (_, b) => auc(eta, outcome, stratifiedBootstrap(outcome, 11, b)));
    const average = areas.reduce((sum, a) => sum + a, 0) / count;
    const error = Math.sqrt(areas.reduce((sum, a) => sum + (a - average) ** 2, 0) / (count - 1));
    // Relative error of a standard deviation over n draws is 1/sqrt(2n); the reference has draws of its own.
    expectNear(error, wanted.bootstrap_se, 4 * wanted.bootstrap_se * Math.sqrt(1 / (2 * count) + 1 / (2 * wanted.B)));
    // A 2.5 % quantile of n normal draws has a standard error of about 2.67 standard deviations over sqrt(n).
    const quantileError = 2.67 * wanted.bootstrap_se * Math.sqrt(1 / count + 1 / wanted.B);
    expectNear(quantileType7(areas, 0.025), wanted.percentile95[0], 4 * quantileError);
    expectNear(quantileType7(areas, 0.975), wanted.percentile95[1], 4 * quantileError);
  });

  it('optimism of AUC and Brier score, and the slope on the original rows', () => {
    const wanted = file.optimism_bootstrap;
    expectNear(auc(eta, outcome), wanted.apparent_auc, 1e-9);
    expectNear(brier(probabilitiesOfBad(eta), outcome), wanted.apparent_brier, 1e-9);
    const foreign = table.numbers('foreign_worker');
    const count = 250;
    let used = 0;
    const sums = { auc: 0, brier: 0, slope: 0 };
    for (let b = 0; b < count; b++) {
      // Harrell's resamples are of all rows, not by stratum.
      const random = new Generator(12, b);
      const weights = new Float64Array(outcome.length);
      for (let draw = 0; draw < outcome.length; draw++) weights[random.below(outcome.length)]++;
      const own = fitAt({ ...problem, weights }, 0, { start: fit, tolerance: 1e-7 });
      if (own.status === 'separation') {
        // 4 of the 37 applicants who are not foreign workers are bad; a resample without them has no finite fit. The reference left such out too.
        const badsAmongThem = foreign.reduce((sum, x, i) => sum + (x > 0 && outcome[i] === 0 ? weights[i] : 0), 0);
        expect(badsAmongThem).toBe(0);
        continue;
      }
      expect(own.status).toBe('converged');
      used++;
      const ownEta = etaOf(own);
      const pd = probabilitiesOfBad(ownEta);
      sums.auc += auc(ownEta, outcome, weights) - auc(ownEta, outcome);
      sums.brier += brier(pd, outcome, weights) - brier(pd, outcome);
      sums.slope += calibration(pd, outcome).slope;
    }
    expect(used).toBeGreaterThan(0.9 * count);
    const within = (error: number): number => 4 * error * Math.sqrt(1 + wanted.B / used);
    expectNear(sums.auc / used, wanted.auc_optimism_mean, within(wanted.auc_optimism_mc_se));
    expectNear(auc(eta, outcome) - sums.auc / used, wanted.corrected_auc, within(wanted.auc_optimism_mc_se));
    expectNear(
      brier(probabilitiesOfBad(eta), outcome) - sums.brier / used,
      wanted.corrected_brier,
      within(wanted.brier_optimism_mc_se),
    );
    expectNear(sums.brier / used, wanted.brier_optimism_mean, within(wanted.brier_optimism_mc_se));
    expectNear(sums.slope / used, wanted.slope_on_original_mean, within(wanted.slope_mc_se));
  });
});

it('reads every figure of delong_asah', () => expectAllRead('delong_asah.json'));

it('reads every figure of hmda_fairness', () =>
  expectAllRead('hmda_fairness.json', {
    'published/logit/se_robust/*': 'robust errors are not part of this library',
    'computed_logit/se_hc1/*': 'robust errors are not part of this library',
    'published/ols_pirat/*': 'least squares is not part of this library',
    'published/ols_pirat_black/*': 'least squares is not part of this library',
    'computed_ols_pirat/*': 'least squares is not part of this library',
    'computed_ols_pirat_black/*': 'least squares is not part of this library',
    'published/probit_pirat_black/*': 'probit is not part of this library',
    'computed_probit/*': 'probit is not part of this library',
    'adverse_impact/fisher_p': "Fisher's exact test is not part of this library",
  }));

it('reads every figure of bootstrap_stochastic', () => expectAllRead('bootstrap_stochastic.json'));
