import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { chiSquareTail } from '../distributions/tails';
import { Generator } from '../random/generator';
import { binomialCriticalCount } from './back-testing';
import { calibration, hosmerLemeshow, priorCorrectedIntercept } from './calibration';
import { auc, delong, kolmogorovSmirnov, pairedDelong, rocCurve } from './discrimination';
import { clopperPearson, herfindahl, jeffreysTail, rateInterval, wilsonInterval } from './intervals';
import { quantileType7 } from './ordering';
import { brier, logLoss, murphyDecomposition } from './probability-scores';
import { rankCorrelation } from './rank-correlation';
import { populationStability, stabilityParts } from './stability-index';

/** Scores of few values, so that there are ties, with both classes. */
const scored = fc
  .array(fc.tuple(fc.integer({ min: 0, max: 8 }), fc.integer({ min: 0, max: 1 }), fc.integer({ min: 1, max: 3 })), {
    minLength: 2,
    maxLength: 60,
  })
  .map((rows) => ({ scores: rows.map(([s]) => s), outcome: rows.map(([, y]) => y), weights: rows.map(([, , w]) => w) }))
  .filter(({ outcome }) => outcome.includes(0) && outcome.includes(1));

function pairs(scores: number[], outcome: number[]): number {
  let won = 0;
  let count = 0;
  scores.forEach((s, i) =>
    scores.forEach((t, k) => {
      if (outcome[i] !== 1 || outcome[k] !== 0) return;
      count++;
      won += s > t ? 1 : s === t ? 0.5 : 0;
    }),
  );
  return won / count;
}

describe('discrimination', () => {
  it('AUC is the share of pairs won, and weights are repeated rows', () => {
    fc.assert(
      fc.property(scored, ({ scores, outcome, weights }) => {
        expect(auc(scores, outcome)).toBeCloseTo(pairs(scores, outcome), 12);
        const repeat = (values: number[]): number[] =>
          values.flatMap((value, i) => Array.from({ length: weights[i] }, () => value));
        expect(auc(scores, outcome, weights)).toBeCloseTo(auc(repeat(scores), repeat(outcome)), 12);
        expect(kolmogorovSmirnov(scores, outcome, weights).ks).toBeCloseTo(
          kolmogorovSmirnov(repeat(scores), repeat(outcome)).ks,
          12,
        );
      }),
    );
  });

  it('does not change under a rising transformation, and mirrors under a falling one', () => {
    fc.assert(
      fc.property(scored, ({ scores, outcome }) => {
        const risen = scores.map((s) => Math.exp(s / 3));
        const fallen = scores.map((s) => -s);
        expect(auc(risen, outcome)).toBe(auc(scores, outcome));
        expect(auc(fallen, outcome)).toBeCloseTo(1 - auc(scores, outcome), 12);
        expect(kolmogorovSmirnov(fallen, outcome).ks).toBeCloseTo(kolmogorovSmirnov(scores, outcome).ks, 12);
        const curve = rocCurve(scores, outcome);
        expect(curve[curve.length - 1]).toMatchObject({ shareOfBads: 1, shareOfGoods: 1 });
      }),
    );
  });

  it('a score tested against itself differs by nothing', () => {
    fc.assert(
      fc.property(scored, ({ scores, outcome }) => {
        const same = pairedDelong(
          scores,
          scores.map((s) => 2 * s + 1),
          outcome,
        );
        expect([same.difference, same.z, same.pValue]).toEqual([0, 0, 1]);
        expect(delong(scores, outcome).auc).toBe(auc(scores, outcome));
      }),
    );
  });

  it('refuses one class, NaN and different lengths', () => {
    expect(() => auc([1, 2], [1, 1])).toThrow('no bad');
    expect(() => auc([1, NaN], [1, 0])).toThrow('index 1');
    expect(() => auc([1, 2, 3], [1, 0])).toThrow();
    expect(() => kolmogorovSmirnov([1], [0])).toThrow('no good');
  });
});

describe('probabilities', () => {
  const forecasts = fc
    .array(fc.tuple(fc.double({ min: 0.01, max: 0.99, noNaN: true }), fc.integer({ min: 0, max: 1 })), {
      minLength: 20,
      maxLength: 80,
    })
    .map((rows) => ({ pd: rows.map(([p]) => Math.round(p * 20) / 20 + 0.001), outcome: rows.map(([, y]) => y) }))
    .filter(({ outcome, pd }) => outcome.includes(0) && outcome.includes(1) && pd.every((p) => p < 1));

  it("Murphy's parts add up to the Brier score", () => {
    fc.assert(
      fc.property(forecasts, ({ pd, outcome }) => {
        const parts = murphyDecomposition(pd, outcome);
        expect(parts.brier).toBeCloseTo(brier(pd, outcome), 12);
        expect(parts.reliability).toBeGreaterThanOrEqual(0);
      }),
    );
  });

  it('a certain forecast that is wrong costs everything, one that is right nothing', () => {
    expect(logLoss([0, 1], [1, 0])).toBe(0);
    expect(logLoss([1], [1])).toBe(Infinity);
    expect(() => brier([1.1], [1])).toThrow('index 0');
  });

  it('the calibration line brought back has slope 1 and intercept 0', () => {
    const random = new Generator(8);
    const pd = Array.from({ length: 800 }, () => 0.02 + 0.5 * random.uniform());
    const outcome = pd.map((p) => (random.uniform() < p * 1.3 ? 0 : 1));
    const line = calibration(pd, outcome);
    expect(line.converged).toBe(true);
    expect(line.inTheLarge).toBeGreaterThan(0);
    const moved = pd.map((p) => 1 / (1 + Math.exp(-(line.intercept + line.slope * Math.log(p / (1 - p))))));
    const again = calibration(moved, outcome);
    expect(again.slope).toBeCloseTo(1, 9);
    expect(again.intercept).toBeCloseTo(0, 9);
    expect(again.inTheLarge).toBeCloseTo(0, 9);
    expect(() => calibration([0, 0.5], [1, 0])).toThrow('logit');
    // PDs that separate goods from bads have no finite slope, and say so.
    expect(calibration([0.1, 0.2, 0.8, 0.9], [1, 1, 0, 0]).converged).toBe(false);
  });

  it('Hosmer-Lemeshow counts groups after merging equal edges', () => {
    const pd = Array.from({ length: 100 }, (_, i) => (i < 60 ? 0.1 : 0.1 + i / 1000));
    const outcome = pd.map((_, i) => (i % 7 === 0 ? 0 : 1));
    const onDevelopment = hosmerLemeshow(pd, outcome, { groups: 10, development: true });
    const elsewhere = hosmerLemeshow(pd, outcome, { groups: 10, development: false });
    expect(onDevelopment.groups).toBeLessThan(10);
    expect(onDevelopment.table.reduce((sum, group) => sum + group.rows, 0)).toBe(100);
    expect(onDevelopment.degreesOfFreedom).toBe(onDevelopment.groups - 2);
    expect(elsewhere.degreesOfFreedom).toBe(elsewhere.groups);
    expect(elsewhere.pValue).toBeCloseTo(chiSquareTail(elsewhere.statistic, elsewhere.groups), 14);
    const single = hosmerLemeshow([0.2, 0.2], [1, 0], { groups: 10, development: true });
    expect([single.groups, single.pValue]).toEqual([1, null]);
  });

  it('a quantile between two PDs makes no group without rows', () => {
    // 21 rows of 0.1 and 19 of 0.2 with the median at 0.1 and a 52.5 % quantile between: of forty groups two are left.
    const pd = Array.from({ length: 40 }, (_, i) => (i < 21 ? 0.1 : 0.2));
    const outcome = pd.map((_, i) => (i % 5 === 0 ? 0 : 1));
    const test = hosmerLemeshow(pd, outcome, { groups: 40, development: false });
    expect(test.table.map(({ rows }) => rows)).toEqual([21, 19]);
    expect([test.groups, test.degreesOfFreedom]).toEqual([2, 2]);
    // By hand: 5 bads where 2.1 are expected, 3 where 3.8 are.
    expect(test.statistic).toBeCloseTo(2.9 ** 2 / (2.1 * 0.9) + 0.8 ** 2 / (3.8 * 0.8), 12);
  });

  it('the prior correction undoes itself', () =>
    expect(priorCorrectedIntercept(priorCorrectedIntercept(0.7, 0.3, 0.04), 0.04, 0.3)).toBeCloseTo(0.7, 12));
});

describe('stability and intervals', () => {
  it('a band empty on both sides adds nothing, on one side there is no value without smoothing', () => {
    expect(populationStability([10, 20, 0], [10, 20, 0])).toBe(0);
    expect(populationStability([10, 20, 0], [10, 20, 5])).toBeNull();
    expect(populationStability([10, 20, 0], [10, 20, 5], 0.5)).toBeGreaterThan(0);
    expect(stabilityParts([10, 0], [10, 5])[1].part).toBeNull();
    expect(populationStability([1, 2, 3], [10, 20, 30])).toBeCloseTo(0, 14);
  });

  it('quantiles of type 7', () => {
    expect([0, 0.25, 0.5, 1].map((p) => quantileType7([4, 1, 3, 2], p))).toEqual([1, 1.75, 2.5, 4]);
    expect(() => quantileType7([], 0.5)).toThrow();
    expect(() => quantileType7([NaN, 1], 0.5)).toThrow();
  });

  it('intervals hold the share and narrow with rows; the exact one is the wider', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 400 }), fc.double({ min: 0, max: 1, noNaN: true }), (rows, share) => {
        const events = Math.round(share * rows);
        const wilson = wilsonInterval(events, rows);
        const exact = clopperPearson(events, rows);
        for (const { lower, upper } of [wilson, exact]) {
          expect(lower).toBeLessThanOrEqual(events / rows + 1e-12);
          expect(upper).toBeGreaterThanOrEqual(events / rows - 1e-12);
          expect(lower).toBeGreaterThanOrEqual(0);
          expect(upper).toBeLessThanOrEqual(1);
        }
        expect(exact.upper - exact.lower).toBeGreaterThanOrEqual(wilson.upper - wilson.lower - 0.02);
      }),
    );
    expect(rateInterval(0, 0)).toBeNull();
    expect(rateInterval(5, 50)?.rate).toBe(0.1);
  });

  it('tails are monotone', () => {
    expect(jeffreysTail(30, 1000, 0.02)).toBeLessThan(jeffreysTail(20, 1000, 0.02));
    expect(binomialCriticalCount(1000, 0.02, 0.99)).toBeGreaterThan(binomialCriticalCount(1000, 0.02, 0.95));
    expect(herfindahl([10, 10, 10]).relative).toBeCloseTo(0, 12);
    expect(herfindahl([30, 0, 0]).relative).toBeCloseTo(1, 12);
  });
});

describe('rank correlation', () => {
  it('heeds order alone, and is 1 with itself and -1 with its reverse', () => {
    fc.assert(
      fc.property(scored, ({ scores, outcome }) => {
        fc.pre(new Set(scores).size > 1 && new Set(outcome).size > 1);
        expect(rankCorrelation(scores, scores.map(Math.exp))).toBeCloseTo(1, 14);
        expect(rankCorrelation(scores, scores.map((score) => -score))).toBeCloseTo(-1, 14);
        expect(rankCorrelation(scores, outcome)).toBeCloseTo(rankCorrelation(outcome, scores), 14);
      }),
    );
  });
  it('is not a number where a score has one value', () => {
    expect(rankCorrelation([1, 1, 1], [1, 2, 3])).toBeNaN();
    expect(rankCorrelation([1], [1])).toBeNaN();
  });
});
