import { expect } from 'vitest';
import {
  aucChangeTest,
  auc,
  binomialCriticalApproximation,
  binomialCriticalCount,
  brier,
  chiSquareQuantile,
  clopperPearson,
  concentrationTest,
  delong,
  gini,
  hanleyMcNeilStandardError,
  herfindahl,
  impactRatios,
  jeffreysInterval,
  jeffreysTail,
  kolmogorovCriticalDistance,
  kolmogorovCriticalValue,
  kolmogorovSmirnov,
  murphyDecomposition,
  normalCdf,
  normalQuantile,
  oneFactorCriticalRate,
  populationStability,
  scaleFactor,
  scaleToPoints,
  spiegelhalter,
  stabilityCriticalValue,
  stabilitySampling,
  varianceInflation,
  weightOfEvidence,
  wilsonInterval,
  Generator,
  multinomial,
} from '@tallystone/numeric';
import type { Handler } from './published-values';
import { expectNear } from './reference-files';

type Numbers = Record<string, number>;
const never = { amount: 0, when: 'never' } as const;
const repeat = (value: number, times: number): number[] => Array.from({ length: times }, () => value);
const eachNear = (actual: ArrayLike<number>, wanted: number[], tolerance: number): void =>
  wanted.forEach((value, i) => expectNear(actual[i], value, tolerance));

/** Chi-square of a 2 x k table against equal rates. */
function chiSquare(goods: number[], bads: number[]): number {
  const G = goods.reduce((a, b) => a + b, 0);
  const B = bads.reduce((a, b) => a + b, 0);
  return goods.reduce((sum, g, i) => {
    const n = g + bads[i];
    const expectedGoods = (n * G) / (G + B);
    const expectedBads = (n * B) / (G + B);
    return sum + (g - expectedGoods) ** 2 / expectedGoods + (bads[i] - expectedBads) ** 2 / expectedBads;
  }, 0);
}

/** Rezac and Rezac 2011: closed forms for normal scores with equal variance, checked with the functions on a fine grid of quantiles. */
const normalScores: Handler = ({ D }: { D: number }, wanted: Numbers) => {
  expectNear(normalCdf(D / Math.SQRT2), wanted.auc, 1e-12);
  expectNear(gini(wanted.auc), wanted.gini, 1e-12);
  expectNear(2 * normalCdf(D / 2) - 1, wanted.ks, 1e-12);
  expectNear(D * D, wanted.information_value, 1e-12);
  const n = 2000;
  const quantiles = Array.from({ length: n }, (_, i) => normalQuantile((i + 0.5) / n));
  const scores = [...quantiles, ...quantiles.map((q) => q + D)];
  const outcome = [...repeat(0, n), ...repeat(1, n)];
  // A grid of n quantiles steps by 1/n in each distribution.
  expectNear(auc(scores, outcome), wanted.auc, 1 / n);
  expectNear(kolmogorovSmirnov(scores, outcome).ks, wanted.ks, 1 / n);
  // Information value from exact normal probabilities in bins of width 0.02: the error of the bins is of the order of their width squared.
  const edges = Array.from({ length: 601 }, (_, k) => -5 + 0.02 * k);
  const mass = (shift: number): number[] =>
    edges.slice(1).map((edge, k) => normalCdf(edge - shift) - normalCdf(edges[k] - shift));
  expectNear(weightOfEvidence(mass(D), mass(0), never).informationValue, wanted.information_value, 1e-3);
};

/** Newcombe 1998, Table I (published figures from memory, reproduced by scipy); Jeffreys: Brown, Cai and DasGupta 2001. */
const interval: Handler = ({ x, n, conf }: Numbers, wanted: Record<string, number[]>) => {
  const pairs = [
    [wilsonInterval(x, n, conf), wanted.wilson],
    [clopperPearson(x, n, conf), wanted.clopper_pearson],
    [jeffreysInterval(x, n, conf), wanted.jeffreys],
  ] as const;
  pairs.forEach(([own, [lower, upper]]) => eachNear([own.lower, own.upper], [lower, upper], 1e-10));
  const wilson = wilsonInterval(x, n, conf);
  const exact = clopperPearson(x, n, conf);
  eachNear([wilson.lower, wilson.upper], wanted.published_wilson, 5e-5);
  eachNear([exact.lower, exact.upper], wanted.published_clopper_pearson, 5e-5);
};

const scaling: Handler = (
  { score0, odds0, pdo }: Numbers,
  wanted: { factor: number; offset: number; published?: number[]; score_at_odds?: Numbers },
) => {
  const points = scaleToPoints(
    { pointsToDouble: pdo, baseScore: score0, baseOdds: odds0, intercept: 'base', rounding: 'nearest' },
    { intercept: 0, terms: [] },
  );
  expectNear(points.factor, wanted.factor, 1e-10);
  expectNear(points.offset, wanted.offset, 1e-10);
  // Printed to four and to three decimals.
  if (wanted.published) {
    expectNear(points.factor, wanted.published[0], 5e-5);
    expectNear(points.offset, wanted.published[1], 5e-4);
  }
  Object.entries(wanted.score_at_odds ?? {}).forEach(([odds, score]) =>
    expectNear(points.offset + points.factor * Math.log(Number(odds)), score, 1e-10),
  );
};

export const scoreChecks: Record<string, Handler> = {
  /** Siddiqi 2006, chapter 6: printed figures from memory, recomputed from the inputs. */
  woe_iv_age_table: (
    { good, bad }: Record<string, number[]>,
    wanted: { woe: number[]; iv: number; published_woe_x100: number[]; published_iv: number },
  ) => {
    const own = weightOfEvidence(good, bad, never);
    eachNear(own.woe, wanted.woe, 1e-12);
    expectNear(own.informationValue, wanted.iv, 1e-12);
    // Printed to three decimals of 100 WOE, some to two.
    wanted.published_woe_x100.forEach((value, i) => expectNear(100 * own.woe[i], value, 5e-3));
    expectNear(own.informationValue, wanted.published_iv, 5e-4);
  },
  /** Thomas, Edelman and Crook 2002, section 8.7: printed figures from memory, recomputed. */
  coarse_class_chi2_residential: (
    { good, bad, grouping_A }: { good: Numbers; bad: Numbers; grouping_A: string[] },
    wanted: { A: Numbers; B: Numbers; published: Numbers },
  ) => {
    const groups = (names: string[][]): [number[], number[]] => [
      names.map((group) => group.reduce((sum, name) => sum + good[name], 0)),
      names.map((group) => group.reduce((sum, name) => sum + bad[name], 0)),
    ];
    const A = groups(grouping_A.map((group) => group.split('+')));
    const B = groups([['owner'], ['parents'], ['rent_unfurn', 'rent_furn', 'other', 'no_answer']]);
    for (const [[goods, bads], own, chi, information] of [
      [A, wanted.A, wanted.published.chi2_A, wanted.published.info_A],
      [B, wanted.B, wanted.published.chi2_B, wanted.published.info_B],
    ] as const) {
      const value = weightOfEvidence(goods, bads, never).informationValue;
      expectNear(chiSquare(goods, bads), own.chi2, 1e-9);
      expectNear(value, own.information_value, 1e-9);
      expectNear(chiSquare(goods, bads), chi, 0.05);
      expectNear(value, information, 5e-5);
    }
  },
  /** Siddiqi 2006, p. 114: printed figures (28.8539 and 487.123) from memory, recomputed. */
  points_scaling_600_50_20: scaling,
  points_scaling_other: scaling,
  'normal_scores_D0.25': normalScores,
  'normal_scores_D0.5': normalScores,
  normal_scores_D1: normalScores,
  'normal_scores_D1.5': normalScores,
  normal_scores_D2: normalScores,
  /** Hanley and McNeil 1982, Tables I and II: printed figures from memory, recomputed. */
  hanley_mcneil_1982: (inputs: Record<string, number[]>, wanted: Numbers) => {
    // Ratings rise with abnormality: the abnormal take the place of the goods.
    const scores = [inputs.rating_counts_normal, inputs.rating_counts_abnormal].flatMap((counts) =>
      counts.flatMap((n, rating) => repeat(rating, n)),
    );
    const outcome = [...repeat(0, 58), ...repeat(1, 51)];
    const own = delong(scores, outcome);
    expectNear(own.auc, wanted.auc, 1e-10);
    expectNear(own.standardError, wanted.se_delong, 1e-10);
    expectNear(hanleyMcNeilStandardError(own.auc, 51, 58), wanted.se_exponential_formula, 1e-10);
    const fromTable = hanleyMcNeilStandardError(own.auc, 51, 58, { q1: wanted.Q1_table, q2: wanted.Q2_table });
    expectNear(fromTable, wanted.se_from_table_Q, 1e-10);
    // The approximation is the function's own when no Q is given.
    const exponential = hanleyMcNeilStandardError(own.auc, 51, 58, { q1: wanted.Q1_exponential, q2: wanted.Q2_exponential });
    expectNear(exponential, wanted.se_exponential_formula, 1e-12);
    expectNear(own.auc, wanted.published_auc, 5e-4);
    expectNear(fromTable, wanted.published_se, 5e-4);
  },
  interval_81_263: interval,
  interval_15_148: interval,
  interval_0_20: interval,
  interval_1_29: interval,
  /** Standard tables (Pearson and Hartley); digits by scipy. */
  chi2_quantiles: ({ p, df }: { p: number; df: number[] }, wanted: { q: number[]; published: Numbers }) => {
    df.forEach((degrees, i) => expectNear(chiSquareQuantile(p, degrees), wanted.q[i], 1e-9));
    Object.entries(wanted.published).forEach(([degrees, value]) =>
      expectNear(chiSquareQuantile(p, Number(degrees)), value, 5e-4 + 1e-9),
    );
  },
  /** Miller 1956. The limit law is what is used here; the exact small-sample values lie below it by the known margin. */
  ks_critical_one_sample: (
    { alpha, n }: Record<string, number[]>,
    wanted: { asymptotic: number[]; first_term: number[]; exact_n10: number; exact_n20: number },
  ) => {
    eachNear(alpha.map(kolmogorovCriticalValue), wanted.asymptotic, 1e-5);
    eachNear(
      alpha.map((a) => Math.sqrt(-Math.log(a / 2) / 2)),
      wanted.first_term,
      1e-12,
    );
    // Stephens' correction of the limit law (JASA 69, 1974, from memory) brings it to the exact table within 1e-3.
    [wanted.exact_n10, wanted.exact_n20].forEach((exact, i) => {
      const root = Math.sqrt(n[i]);
      expectNear(kolmogorovCriticalValue(0.05) / (root + 0.12 + 0.11 / root), exact, 1e-3);
    });
  },
  /** Smirnov 1948. The entry takes the first term of the limit law; the further terms, which are taken here, change the sixth digit. */
  ks_two_sample_critical: ({ m, n, alpha }: Numbers, wanted: Numbers) => {
    expectNear(Math.sqrt(-Math.log(alpha / 2) / 2) * Math.sqrt((m + n) / (m * n)), wanted.critical, 1e-10);
    expectNear(kolmogorovCriticalDistance(alpha, m, n), wanted.critical, 3e-6 * wanted.critical);
  },
  /** Kullback 1959; Jeffreys 1946. */
  psi_is_jeffreys_divergence: ({ expected, actual }: Record<string, number[]>, wanted: Numbers) => {
    expectNear(populationStability(expected, actual) ?? NaN, wanted.psi, 1e-14);
    expectNear(populationStability(actual, expected) ?? NaN, wanted.psi_swapped, 1e-14);
    expectNear(wanted.kl_pq + wanted.kl_qp, wanted.psi, 1e-14);
    expectNear(weightOfEvidence(actual, expected, never).informationValue, wanted.psi, 1e-14);
  },
  /** Yurdakul 2018. */
  psi_reference_distribution: (
    { N, M, B }: { N: number[]; M: number[]; B: number },
    wanted: Record<string, number[]>,
    simulation: Numbers,
  ) => {
    const law = stabilitySampling(simulation.theory_q95, simulation.N, simulation.M, B);
    expectNear(law.expectation, simulation.theory_mean, 1e-14);
    expectNear(law.pValue, 0.05, 1e-12);
    // The reference's simulation: the mean has the law's standard deviation over sqrt(reps), a 95 % quantile 2.11 times that.
    const error = law.standardDeviation / Math.sqrt(simulation.reps);
    expectNear(simulation.mean, law.expectation, 4 * error);
    expectNear(simulation.q95, stabilityCriticalValue(simulation.N, simulation.M, B, 0.95), 4 * 2.11 * 1.1 * error);
    N.forEach((rows, i) => {
      expectNear(stabilitySampling(wanted.crit99[i], rows, M[i], B).pValue, 0.01, 1e-12);
      expectNear(stabilityCriticalValue(rows, M[i], B, 0.95), wanted.crit95[i], 1e-10);
      expectNear(stabilityCriticalValue(rows, M[i], B, 0.99), wanted.crit99[i], 1e-10);
      const normal = (1 / rows + 1 / M[i]) * (B - 1 + normalQuantile(0.95) * Math.sqrt(2 * (B - 1)));
      expectNear(normal, wanted.normal_approx95[i], 1e-10);
    });
    // Expectation (1/N + 1/M)(B - 1) of the index of two samples from one population, by simulation: 0.018, standard deviation about 0.0085.
    const random = new Generator(20, 0);
    const equal = repeat(1, B);
    let sum = 0;
    const runs = 2000;
    for (let r = 0; r < runs; r++)
      sum += populationStability(multinomial(random, 1000, equal), multinomial(random, 1000, equal)) ?? NaN;
    expectNear(sum / runs, 0.018, (4 * 0.0085) / Math.sqrt(runs));
  },
  /** Good 1950: points to double the odds of 10 log10 2 are decibans. */
  deciban_units: ({ odds_ratio }: Numbers, wanted: Numbers) => {
    expectNear(Math.log(odds_ratio), wanted.nats, 1e-12);
    expectNear((10 / Math.LN10) * Math.log(odds_ratio), wanted.decibans, 1e-12);
    expectNear(scaleFactor(wanted.decibans), 10 / Math.LN10, 1e-12);
  },
  /** Basel Committee Working Paper 14, 2005; integers by scipy. */
  binomial_test_critical: (_: unknown, wanted: { table: Numbers[] }) => {
    wanted.table.forEach(({ N, PD, k_reject_95, k_reject_99, k_reject_999, normal_approx_95 }) => {
      expect([0.95, 0.99, 0.999].map((level) => binomialCriticalCount(N, PD, level))).toEqual([
        k_reject_95,
        k_reject_99,
        k_reject_999,
      ]);
      expectNear(binomialCriticalApproximation(N, PD, 0.95), normal_approx_95, 1e-9);
    });
  },
  /** Tasche 2003. */
  traffic_light_one_factor: ({ PD, rho }: { PD: number[]; rho: number }, wanted: Record<string, number[]>) => {
    PD.forEach((pd, i) => {
      expectNear(oneFactorCriticalRate(pd, rho, 0.95), wanted.rate95[i], 1e-10);
      expectNear(oneFactorCriticalRate(pd, rho, 0.999), wanted.rate999[i], 1e-10);
    });
  },
  /** European Central Bank 2019, 2.5.3 (formula from memory); numbers by scipy. */
  jeffreys_test: (_: unknown, wanted: { table: Numbers[] }) =>
    wanted.table.forEach(({ N, D, PD, p_value }) => expectNear(jeffreysTail(D, N, PD), p_value, 1e-12)),
  /** European Central Bank 2019, 2.5.5 (formula from memory). */
  auc_change_test: ({ auc_initial, auc_current, var_current }: Numbers, wanted: Numbers) => {
    const own = aucChangeTest(auc_initial, auc_current, Math.sqrt(var_current));
    expectNear(own.statistic, wanted.S, 1e-12);
    expectNear(own.pValue, wanted.p, 1e-12);
  },
  /** European Central Bank 2019, 2.5.5.3 (the relative index from memory). */
  herfindahl_concentration: ({ counts }: Record<string, number[]>, wanted: Numbers) => {
    const own = herfindahl(counts);
    eachNear([own.index, own.coefficientOfVariation, own.relative], [wanted.hhi, wanted.cv, wanted.hi], 1e-12);
  },
  concentration_test: ({ counts_initial, counts_current }: Record<string, number[]>, wanted: Numbers) => {
    const own = concentrationTest(counts_initial, counts_current);
    expectNear(herfindahl(counts_initial).coefficientOfVariation, wanted.cv_init, 1e-12);
    expectNear(herfindahl(counts_current).coefficientOfVariation, wanted.cv_curr, 1e-12);
    eachNear([own.z, own.pValue], [wanted.z, wanted.p], 1e-12);
  },
  /** Murphy 1973; Spiegelhalter 1986. */
  brier_murphy: ({ forecast, n, events }: Record<string, number[]>, wanted: Numbers) => {
    const pd = forecast.flatMap((value, g) => repeat(value, n[g]));
    const outcome = n.flatMap((rows, g) => [...repeat(0, events[g]), ...repeat(1, rows - events[g])]);
    const own = murphyDecomposition(pd, outcome);
    eachNear(
      [own.brier, own.reliability, own.resolution, own.uncertainty],
      [wanted.brier, wanted.reliability, wanted.resolution, wanted.uncertainty],
      1e-12,
    );
    expectNear(own.skill, wanted.brier_skill, 1e-12);
    expectNear(brier(pd, outcome), wanted.brier, 1e-12);
    expectNear(spiegelhalter(pd, outcome).z, wanted.spiegelhalter_z, 1e-12);
    const chi = forecast.reduce((sum, p, g) => sum + (events[g] - n[g] * p) ** 2 / (n[g] * p * (1 - p)), 0);
    expectNear(chi, wanted.hl_chi2, 1e-12);
  },
  /** 44 FR 11996 (1979), question 12; read in a public summary. */
  four_fifths: (
    { selection_rates }: { selection_rates: Numbers },
    wanted: { ratios: Numbers; flag_below_0_8: Record<string, boolean> },
  ) => {
    const names = Object.keys(selection_rates);
    const own = impactRatios(names.map((name) => selection_rates[name]));
    Object.entries(wanted.ratios).forEach(([name, ratio]) => expectNear(own[names.indexOf(name)].ratio, ratio, 1e-12));
    Object.entries(wanted.flag_below_0_8).forEach(([name, flag]) => expect(own[names.indexOf(name)].below).toBe(flag));
  },
  /** Engelmann, Hayden and Tasche 2003. */
  auc_gini_cap_identity: ({ bad_scores, good_scores }: Record<string, number[]>, wanted: Numbers) => {
    // The file's scores rise with risk.
    const own = auc(
      [...bad_scores, ...good_scores].map((s) => -s),
      [...repeat(0, bad_scores.length), ...repeat(1, good_scores.length)],
    );
    expectNear(own, wanted.auc, 1e-14);
    expectNear(gini(own), wanted.gini, 1e-14);
  },
  vif_two_predictors: ({ r }: { r: number[] }, wanted: { vif: number[] }) => {
    r.forEach((correlation, i) => {
      // Two orthogonal unit columns make one of exactly this correlation.
      const a = Float64Array.of(1, 1, -1, -1);
      const other = Float64Array.of(1, -1, 1, -1);
      const b = a.map((value, k) => correlation * value + Math.sqrt(1 - correlation * correlation) * other[k]);
      eachNear(varianceInflation([a, b]), [wanted.vif[i], wanted.vif[i]], 1e-11);
    });
  },
};
