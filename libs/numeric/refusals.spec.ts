import { describe, expect, it } from 'vitest';
import { giniOfBins } from './bench/index';
import * as engine from './engine/index';
import * as numeric from './index';

const nan = Float64Array.of(1, NaN, 3, 4);
const scores = Float64Array.of(1, 2, 3, 4);
const outcome = Uint8Array.of(0, 1, 0, 1);
const pd = [0.1, 0.2, NaN, 0.4];
const problem: numeric.FitProblem = { columns: [scores], outcome, penalty: { mixing: 1, standardize: true } };
const level = { seed: 1, level: NaN };

const limits: numeric.Constraints = {
  smallestShare: 0,
  smallestGoods: 0,
  smallestBads: 0,
  mostBins: 3,
  smallestDifference: 0,
  trend: 'any',
};
const codes = Uint8Array.of(0, 1, 0, 1);

/** A call with something that is no number, and where in it. */
const calls: [string, () => unknown, object][] = [
  ['values', () => numeric.fineEdgesOfCounts([1, NaN], [1, 1], 2), { name: 'values', index: 1 }],
  ['counts', () => numeric.fineEdgesOfCounts([1, 2], [1, NaN], 2), { name: 'counts', index: 1 }],
  [
    'goods',
    () => numeric.chooseTrend({ goods: [1, NaN], bads: [1, 1], rows: [2, 2] }, limits, { folds: 2, seed: 1 }),
    { name: 'goods', index: 1 },
  ],
  [
    'values',
    () => numeric.codedCorrelation([{ codes, values: [1, NaN] }], Uint8Array.of(1, 1, 1, 1)),
    { name: 'values of column 0', index: 1 },
  ],
  [
    'weights',
    () => numeric.codedCorrelation([{ codes, values: [1, 2] }], Uint8Array.of(1, 1, 1, 1), nan),
    { name: 'weights', index: 1 },
  ],
  ['threshold', () => numeric.clustersAt([], 1, NaN), { name: 'threshold' }],
  ['column', () => numeric.fitAt({ ...problem, columns: [scores, nan] }, 0.1), { name: 'columns', column: 1, index: 1 }],
  ['column', () => numeric.fitIndependently({ ...problem, columns: [nan] }, 0.1), { name: 'columns', column: 0, index: 1 }],
  ['column', () => numeric.fitPath({ ...problem, columns: [nan] }, { lambdas: [1] }), { name: 'columns', column: 0, index: 1 }],
  ['column', () => numeric.fitForeignChallenger({ ...problem, columns: [nan] }), { name: 'columns', column: 0, index: 1 }],
  [
    'column',
    () => numeric.resampleFits({ ...problem, columns: [nan] }, 1, { seed: 1, count: 2 }),
    { name: 'columns', column: 0, index: 1 },
  ],
  ['weights', () => numeric.fitAt({ ...problem, weights: nan }, 0.1), { name: 'weights', index: 1 }],
  ['offset', () => numeric.nullDeviance({ ...problem, offset: nan }), { name: 'offset', index: 1 }],
  [
    'multipliers',
    () => numeric.fitAt({ ...problem, penalty: { ...problem.penalty, multipliers: Float64Array.of(NaN) } }, 1),
    { name: 'multipliers', index: 0 },
  ],
  [
    'lower',
    () => numeric.fitAt({ ...problem, penalty: { ...problem.penalty, lower: Float64Array.of(NaN) } }, 1),
    { name: 'lower' },
  ],
  [
    'upper',
    () => numeric.fitAt({ ...problem, penalty: { ...problem.penalty, upper: Float64Array.of(NaN) } }, 1),
    { name: 'upper' },
  ],
  ['a', () => numeric.rankCorrelation(nan, scores), { name: 'a', index: 1 }],
  ['b', () => numeric.rankCorrelation(scores, nan), { name: 'b', index: 1 }],
  ['mixing', () => numeric.fitAt({ ...problem, penalty: { ...problem.penalty, mixing: NaN } }, 1), { name: 'mixing' }],
  ['lambda', () => numeric.fitAt(problem, NaN), { name: 'lambda' }],
  ['lambda', () => numeric.crossValidate(problem, Uint8Array.of(1, 1, 2, 2), [NaN]), { name: 'lambda' }],
  ['grid', () => numeric.automaticGrid(NaN, 3, 0.1), { name: 'grid' }],
  [
    'point',
    () => numeric.objective(problem, { lambda: 1, intercept: 0, coefficients: Float64Array.of(NaN) }),
    { name: 'coefficients', index: 0 },
  ],
  [
    'point',
    () => numeric.optimalityResidual(problem, { lambda: 1, intercept: NaN, coefficients: Float64Array.of(1) }),
    { name: 'intercept', index: 0 },
  ],
  ['eta', () => numeric.linearPredictor([nan], 0, [1]), { name: 'eta', index: 1 }],
  ['eta', () => numeric.probabilitiesOfBad(nan), { name: 'eta', index: 1 }],
  ['eta', () => numeric.deviance(outcome, nan), { name: 'eta', index: 1 }],
  ['scores', () => numeric.auc(nan, outcome), { name: 'scores', index: 1 }],
  ['scores', () => numeric.auc(nan, outcome, scores), { name: 'scores', index: 1 }],
  ['weights', () => numeric.auc(scores, outcome, nan), { name: 'weights', index: 1 }],
  ['scores', () => numeric.rocCurve(nan, outcome), { name: 'scores', index: 1 }],
  ['scores', () => numeric.kolmogorovSmirnov(nan, outcome), { name: 'scores', index: 1 }],
  ['scores', () => numeric.delong(nan, outcome), { name: 'scores', index: 1 }],
  ['level', () => numeric.delong(scores, outcome, NaN), { name: 'level' }],
  ['scores', () => numeric.pairedDelong(scores, nan, outcome), { name: 'scores', index: 1 }],
  ['area', () => numeric.gini(NaN), { name: 'area' }],
  ['pd', () => numeric.brier(pd, outcome), { name: 'pd', index: 2 }],
  ['pd', () => numeric.logLoss(pd, outcome), { name: 'pd', index: 2 }],
  ['pd', () => numeric.murphyDecomposition(pd, outcome), { name: 'pd', index: 2 }],
  ['group', () => numeric.murphyOfGroups([0.1, NaN], [2, 2], [1, 1]), { name: 'groups', index: 1 }],
  ['pd', () => numeric.spiegelhalter(pd, outcome), { name: 'pd', index: 2 }],
  ['pd', () => numeric.hosmerLemeshow(pd, outcome, { development: true }), { name: 'pd', index: 2 }],
  ['pd', () => numeric.calibration(pd, outcome), { name: 'pd', index: 2 }],
  ['intercept', () => numeric.priorCorrectedIntercept(NaN, 0.1, 0.2), { name: 'intercept', index: 0 }],
  ['values', () => numeric.quantileType7(nan, 0.5), { name: 'values', index: 1 }],
  ['p', () => numeric.quantilesType7(scores, [NaN]), { name: 'p' }],
  ['values', () => numeric.quantileOfSorted(Float64Array.of(1, 2, NaN), 0.5), { name: 'values', index: 2 }],
  ['events', () => numeric.wilsonInterval(NaN, 5), { name: 'events' }],
  ['rows', () => numeric.clopperPearson(1, NaN), { name: 'events' }],
  ['level', () => numeric.clopperPearson(1, 5, NaN), { name: 'level' }],
  ['events', () => numeric.jeffreysInterval(6, 5), { name: 'events' }],
  ['rows', () => numeric.rateInterval(1, NaN), { name: 'events' }],
  ['probability', () => numeric.jeffreysTail(1, 5, NaN), { name: 'probability' }],
  ['counts', () => numeric.herfindahl([1, NaN]), { name: 'counts', index: 1 }],
  ['counts', () => numeric.herfindahl([1, -1]), { name: 'counts' }],
  ['counts', () => numeric.concentrationTest([1, 2], [NaN, 1]), { name: 'counts', index: 0 }],
  ['rates', () => numeric.impactRatios([0.5, NaN]), { name: 'rates', index: 1 }],
  ['level', () => numeric.binomialCriticalCount(10, 0.1, NaN), { name: 'level' }],
  ['pd', () => numeric.binomialCriticalCount(10, NaN, 0.9), { name: 'probability' }],
  ['pd', () => numeric.binomialCriticalApproximation(10, NaN, 0.9), { name: 'pd' }],
  ['correlation', () => numeric.oneFactorCriticalRate(0.1, NaN, 0.9), { name: 'correlation' }],
  ['area', () => numeric.aucChangeTest(NaN, 0.7, 0.1), { name: 'areas', index: 0 }],
  ['error', () => numeric.aucChangeTest(0.8, 0.7, NaN), { name: 'standardError' }],
  ['area', () => numeric.hanleyMcNeilStandardError(NaN, 5, 5), { name: 'area' }],
  ['rows', () => numeric.kolmogorovCriticalDistance(0.05, NaN, 5), { name: 'rows' }],
  ['alpha', () => numeric.kolmogorovCriticalValue(NaN), { name: 'alpha' }],
  ['counts', () => numeric.populationStability([1, 2], [NaN, 2]), { name: 'actual', index: 0 }],
  ['rows', () => numeric.stabilityCriticalValue(NaN, 5, 3, 0.9), { name: 'rows' }],
  ['index', () => numeric.stabilitySampling(NaN, 5, 5, 3), { name: 'index' }],
  ['x', () => numeric.chiSquareTail(NaN, 3), { name: 'x' }],
  ['degrees', () => numeric.chiSquareQuantile(0.5, NaN), { name: 'degreesOfFreedom' }],
  ['x', () => numeric.noncentralChiSquareTail(NaN, 3, 1), { name: 'x' }],
  ['noncentrality', () => numeric.noncentralChiSquareTail(1, 3, NaN), { name: 'noncentrality' }],
  ['x', () => numeric.noncentralityAt(NaN, 3, 0.5), { name: 'x' }],
  ['tail', () => numeric.noncentralityAt(1, 3, NaN), { name: 'tail' }],
  ['x', () => numeric.betaCdf(NaN, 1, 1), { name: 'x' }],
  ['p', () => numeric.betaQuantile(NaN, 1, 1), { name: 'p' }],
  ['z', () => numeric.normalCdf(NaN), { name: 'z' }],
  ['p', () => numeric.normalQuantile(NaN), { name: 'p' }],
  ['goods', () => numeric.weightOfEvidence([1, NaN], [1, 1], { amount: 0, when: 'never' }), { name: 'goods', index: 1 }],
  ['level', () => numeric.informationValueInterval([5, 5], [5, 5], level), { name: 'level' }],
  ['value', () => numeric.binOf(NaN, [1], 'left'), { name: 'value' }],
  ['values', () => numeric.assignBins(nan, [2], 'left'), { name: 'values', index: 1 }],
  ['bins', () => numeric.countBins([0, -1], [1, 0], 2), { name: 'bins', index: 1 }],
  ['bins', () => numeric.countBins([0.5, 0], [1, 0], 2), { name: 'bins', index: 0 }],
  ['outcome', () => numeric.countBins([0, 0], [1, NaN], 2), { name: 'outcome', index: 1 }],
  ['weights', () => numeric.countBins([0, 0], [1, 0], 2, [1, NaN]), { name: 'weights', index: 1 }],
  ['values', () => numeric.fineEdges(nan, 3), { name: 'values', index: 1 }],
  ['woe', () => giniOfBins([1, 1], [1, 1], [NaN, 1]), { name: 'woe', index: 0 }],
  ['PDO', () => numeric.scaleFactor(NaN), { name: 'pointsToDouble' }],
  ['columns', () => numeric.varianceInflation([scores, nan]), { name: 'column 1', index: 1 }],
  ['weights', () => numeric.conditionIndex([scores], nan), { name: 'weights', index: 1 }],
  ['shares', () => numeric.multinomial(new numeric.Generator(1), 5, [1, NaN]), { name: 'shares', index: 1 }],
  ['shares', () => numeric.multinomial(new numeric.Generator(1), 5, [0, 0]), { name: 'shares' }],
  ['seed', () => new numeric.Generator(NaN), { name: 'seed' }],
  ['count', () => new numeric.Generator(1).below(0), { name: 'count' }],
  ['p', () => new numeric.Generator(1).binomial(5, NaN), { name: 'p' }],
  ['seed', () => numeric.stratifiedBootstrap(outcome, NaN, 0), { name: 'seed' }],
  ['fast', () => numeric.fastFit({ ...problem, columns: [nan] }, 1), { name: 'columns', column: 0, index: 1 }],
  ['fast', () => numeric.fastPath({ ...problem, columns: [nan] }, { lambdas: [1] }), { name: 'columns', column: 0, index: 1 }],
  [
    'fast',
    () => numeric.fastCrossValidation({ ...problem, columns: [nan] }, Uint8Array.of(1, 1, 2, 2), [1]),
    { name: 'columns', column: 0, index: 1 },
  ],
];

describe('what is no number is refused with its place, never passed on', () => {
  it.each(calls)('%s: %s', (_, act, where) => {
    try {
      act();
    } catch (error) {
      expect(error).toBeInstanceOf(numeric.NumericError);
      expect((error as numeric.NumericError).where).toMatchObject(where);
      return;
    }
    throw new Error('it was accepted');
  });

  it('covers every public function that takes numbers', () => {
    const text = calls.map(([, act]) => act.toString()).join('\n');
    // Elementwise, and what a test without a standard error passes on: NaN in, NaN out, as their docstrings say. The others take fits and draws.
    const passedOn = [
      'probabilityOfGood',
      'probabilityOfBad',
      'normalTail',
      'normalTwoSided',
      'roundAwayFromZero',
      'ascendingOrder',
    ];
    // A correlation of a column without variance is NaN, and these know it.
    const ofCorrelations = ['inflationOf', 'hierarchy'];
    const ofResults = [
      'summarise',
      'stabilityOfCoefficients',
      'stabilityOfPoints',
      'stabilityOfFit',
      'trendOf',
      'shortestBetween',
    ];
    const byOthers = ['largestLambda', 'scoresByOutcome', 'stabilityParts', 'binomialTail', 'correlation', 'standardErrors'];
    const checked = ['strataOf', 'drawStratified'];
    const elsewhere = ['classNumeric', 'classCategories', 'scaleToPoints'];
    const known = new Set([...passedOn, ...ofCorrelations, ...ofResults, ...byOthers, ...checked, ...elsewhere]);
    const functions = Object.entries(numeric as Record<string, unknown>).filter(
      ([name, value]) => typeof value === 'function' && !/^require|Error$/.test(name) && !(name in engine),
    );
    expect(functions.map(([name]) => name).filter((name) => !text.includes(`${name}(`) && !known.has(name))).toEqual([]);
  });
});

describe('predictions that are all equal', () => {
  const same = [0.2, 0.2, 0.2, 0.2, 0.2, 0.2];
  const mixed = [1, 1, 1, 0, 1, 0];

  it('order nothing', () => {
    expect(numeric.auc(same, mixed)).toBe(0.5);
    expect(numeric.auc(same, mixed, [1, 2, 3, 4, 5, 6])).toBe(0.5);
    expect(numeric.kolmogorovSmirnov(same, mixed)).toEqual({ ks: 0, at: 0.2 });
    expect(numeric.kolmogorovSmirnov(same, mixed, [1, 2, 3, 4, 5, 6])).toEqual({ ks: 0, at: 0.2 });
    expect(numeric.delong(same, mixed)).toEqual({ auc: 0.5, standardError: 0, lower: 0.5, upper: 0.5 });
    const paired = numeric.pairedDelong(
      same,
      same.map((s) => s + 1),
      mixed,
    );
    expect([paired.difference, paired.z, paired.pValue]).toEqual([0, 0, 1]);
  });

  it('are calibrated in the large alone', () => {
    const line = numeric.calibration(same, mixed);
    // By hand: a bad rate of 1/3 against a PD of 1/5; the information of six rows at 1/3 is 6 x 2/9.
    expect(line.inTheLarge).toBeCloseTo(Math.log(1 / 2) - Math.log(1 / 4), 12);
    expect(line.inTheLargeStandardError).toBeCloseTo(1 / Math.sqrt(6 * (2 / 9)), 12);
    expect([line.slope, line.slopeStandardError, line.intercept, line.interceptStandardError]).toEqual([NaN, NaN, NaN, NaN]);
    expect(line.converged).toBe(false);
    // A row of weight 0 with another PD is no spread.
    expect(numeric.calibration([0.9, ...same], [1, ...mixed], [0, 1, 1, 1, 1, 1, 1]).slope).toBeNaN();
  });

  it('make one group and no resolution', () => {
    const test = numeric.hosmerLemeshow(same, mixed, { development: true });
    expect([test.groups, test.degreesOfFreedom, test.pValue]).toEqual([1, -1, null]);
    expect(test.statistic).toBeCloseTo((2 - 1.2) ** 2 / (1.2 * 0.8), 12);
    const parts = numeric.murphyDecomposition(same, mixed);
    expect(parts.resolution).toBe(0);
    expect(parts.reliability).toBeCloseTo((0.2 - 1 / 3) ** 2, 14);
    expect(numeric.brier(same, mixed)).toBeCloseTo(parts.brier, 14);
    expect(numeric.murphyDecomposition([0.1, 0.2], [1, 1]).skill).toBeNaN();
    // By hand: z = sum (bad - p)(1 - 2p) / sqrt(sum (1 - 2p)^2 p(1 - p)).
    expect(numeric.spiegelhalter(same, mixed).z).toBeCloseTo((2 - 6 * 0.2) / Math.sqrt(6 * 0.2 * 0.8), 12);
    expect(numeric.spiegelhalter([0.5, 0.5], [1, 0]).z).toBeNaN();
  });

  it('one bad has no standard error, and nothing is invented', () => {
    const one = [1, 1, 1, 0];
    expect(numeric.delong([1, 2, 3, 0], one)).toEqual({ auc: 1, standardError: NaN, lower: NaN, upper: NaN });
    expect(numeric.pairedDelong([1, 2, 3, 0], [1, 2, 0, 3], one).pValue).toBeNaN();
    expect(numeric.concentrationTest([1, 1], [1, 1])).toEqual({ z: 0, pValue: 0.5 });
    expect(numeric.concentrationTest([1, 2], [1, 1]).pValue).toBe(1);
  });

  it('forecasts of 0 and 1: right costs nothing, wrong is told', () => {
    expect(numeric.hosmerLemeshow([0, 0, 1, 1], [1, 1, 0, 0], { development: false }).statistic).toBe(0);
    const wrong = numeric.hosmerLemeshow([0, 0, 1, 1], [1, 0, 0, 0], { development: false });
    expect([wrong.statistic, wrong.pValue]).toEqual([Infinity, 0]);
    expect(() => numeric.calibration([0, 0.5], [1, 0])).toThrow('index 0');
  });

  it('Kolmogorov far out', () => {
    // One term of the law is enough there: 2 exp(-2 c^2) = alpha.
    expect(numeric.kolmogorovCriticalValue(1e-200)).toBeCloseTo(Math.sqrt(-Math.log(1e-200 / 2) / 2), 10);
  });
});
