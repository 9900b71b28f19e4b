import { optimalityResidual } from '@tallystone/numeric';
import { resultSchema } from '@tallystone/contracts/result/schema';
import type { Result } from '@tallystone/contracts/result/types';
import { describe, expect, it } from 'vitest';
import { choosePenalty, trainPaths } from './fit';
import { evaluateFit, evaluatorOf } from './evaluate';
import { AGE, HOME, INCOME, inventedSample, repeatedRows, sourceOfSample, specificationOf, type Sample } from './invented-sample';
import { ReplayError } from './problems';
import { replay, type Replayed } from './replay';

const sample = inventedSample(1200);
const none = '0'.repeat(64);

function run(more: object = {}, from: Sample = sample): Replayed {
  return replay({
    specification: specificationOf(more),
    specificationSha256: none,
    dataSha256: none,
    source: sourceOfSample(from),
    version: '1',
  });
}

function result(more: object = {}, from: Sample = sample): Result {
  return resultSchema.parse(JSON.parse(JSON.stringify(run(more, from).result)));
}

const close = (actual: number, wanted: number, tolerance: number): void =>
  expect(Math.abs(actual - wanted)).toBeLessThanOrEqual(tolerance);
const coefficients = (of: Result): (number | null)[] => of.characteristics.map((one) => one.coefficient);

describe('weights', () => {
  it('of whole numbers equal repeated rows, in tables, fit and weighted metrics', () => {
    const weighted = result({ weight: { column: 'w' } });
    const repeated = result(
      {},
      repeatedRows(sample, (row) => Number(sample['w'][row])),
    );
    weighted.characteristics.forEach((one, index) => {
      const other = repeated.characteristics[index];
      close(one.coefficient ?? NaN, other.coefficient ?? NaN, 1e-8);
      one.bins.forEach((bin, place) => {
        expect([bin.goods, bin.bads]).toEqual([other.bins[place].goods, other.bins[place].bads]);
        close(bin.woe, other.bins[place].woe, 1e-14);
      });
    });
    close(weighted.weightedMetrics?.holdOut?.auc ?? NaN, repeated.metrics.holdOut?.auc ?? NaN, 1e-9);
    close(weighted.weightedMetrics?.holdOut?.logLoss ?? NaN, repeated.metrics.holdOut?.logLoss ?? NaN, 1e-8);
    expect(weighted.counts.development.weight).toBe(repeated.counts.development.goods + repeated.counts.development.bads);
    expect(weighted.metrics.holdOut?.auc).not.toBe(weighted.weightedMetrics?.holdOut?.auc);
    expect(weighted.weightedMetrics?.holdOut?.hosmerLemeshow).toBeNull();
  });
});

describe('codings', () => {
  it('an unpenalised indicator reproduces the log odds of each bin, the first bin with rows being the reference', () => {
    const fitted = result({ characteristics: [{ ...HOME, coding: 'indicator' }], fit: { mixing: 1, lambda: { value: 0 } } });
    const [home] = fitted.characteristics;
    expect(home.coefficient).toBeNull();
    expect(home.bins[0].coefficient).toBe(0);
    // Unseen categories enter as the reference does; here they are in the intercept, so the check leaves them out.
    const plain = repeatedRows(sample, (row) => (sample['home'][row] === 'caravan' ? 0 : 1));
    const exact = result(
      { characteristics: [{ ...HOME, coding: 'indicator' }], fit: { mixing: 1, lambda: { value: 0 } } },
      plain,
    );
    exact.characteristics[0].bins
      .slice(0, 3)
      .forEach((bin) => close(exact.intercept + (bin.coefficient ?? NaN), Math.log(bin.goods / bin.bads), 1e-8));
    expect(exact.characteristics[0].bins[3]).toMatchObject({ label: 'missing', rows: 0, woe: 0, coefficient: 0 });
  });

  it('a penalised indicator has every bin, and is kept if any coefficient is nonzero', () => {
    const fitted = result({
      characteristics: [{ ...HOME, coding: 'indicator' }, INCOME],
      fit: { mixing: 1, lambda: { value: 0.02 } },
    });
    const values = fitted.characteristics[0].bins.map((bin) => bin.coefficient);
    expect(values.some((value) => value === 0)).toBe(true);
    expect(fitted.kept).toBe(2);
    const points = fitted.characteristics[0].bins.map((bin) => bin.points);
    const share = fitted.basePoints / 2;
    points.forEach((value, index) => close(value, share + (25 / Math.LN2) * (values[index] ?? NaN), 1e-9));
    expect(fitted.path[0].coefficients['home']).toHaveLength(4);
  });

  it('a linear characteristic has no bins and leaves no scorecard', () => {
    const known = repeatedRows(sample, (row) => (sample['income'][row] === 'NA' ? 0 : 1));
    const fitted = result(
      { characteristics: [{ column: 'income', kind: 'numeric', coding: 'linear', missing: 'refuse' }, AGE] },
      known,
    );
    expect(fitted.characteristics[0]).toMatchObject({ informationValue: null, bins: [], csi: { holdOut: null } });
    expect(fitted.characteristics[0].coefficient).toBeGreaterThan(0);
    expect(fitted.metrics.holdOut?.aucRounded).toBeNull();
    expect(() =>
      result({ characteristics: [{ column: 'income', kind: 'numeric', coding: 'linear', missing: 'refuse' }] }),
    ).toThrow(ReplayError);
  });
});

describe('scores', () => {
  it('of equal bins tie exactly and are Offset + Factor x eta; rounded scores are sums of rounded points', () => {
    for (const intercept of ['spread', 'base'] as const) {
      const {
        prepared,
        coded,
        fitted,
        result: made,
      } = run({ scaling: { pointsToDouble: 20, baseScore: 600, baseOdds: 50, intercept } });
      const evaluator = evaluatorOf(
        specificationOf({ scaling: { pointsToDouble: 20, baseScore: 600, baseOdds: 50, intercept } }),
        prepared,
        coded,
        fitted.trained.tables,
      );
      const { scores } = evaluateFit(evaluator, fitted.terms, fitted.model);
      const seen = new Map<string, number>();
      evaluator.partitions.development.rows.forEach((row, place) => {
        const bins = coded.characteristics.map((one) => one.codes?.[row] ?? -1);
        const score = scores.development.scores[place];
        expect(seen.get(bins.join()) ?? score).toBe(score);
        seen.set(bins.join(), score);
        if (bins.includes(255)) return;
        const rounded = made.characteristics.reduce(
          (sum, one, index) => sum + one.bins[bins[index]].pointsRounded,
          intercept === 'base' ? Math.round(made.basePoints) : 0,
        );
        expect(scores.development.rounded?.[place]).toBe(rounded);
        const exact = made.characteristics.reduce(
          (sum, one, index) => sum + one.bins[bins[index]].points,
          intercept === 'base' ? made.basePoints : 0,
        );
        close(score, exact, 1e-9);
      });
      expect(seen.size).toBeGreaterThan(30);
    }
  });

  it('fall back to the base form with nothing kept', () => {
    const fitted = result({ fit: { mixing: 1, lambda: { value: 10 } } });
    expect(fitted.kept).toBe(0);
    expect(fitted.characteristics.flatMap((one) => one.bins.map((bin) => bin.points)).every((value) => value === 0)).toBe(true);
    const { goods, bads } = fitted.counts.development;
    close(fitted.intercept, Math.log(goods / bads), 1e-9);
    expect(fitted.metrics.development).toMatchObject({
      auc: 0.5,
      ks: 0,
      calibrationSlope: null,
      smallestScore: fitted.basePoints,
    });
    expect(fitted.bands.reduce((sum, band) => sum + band.development.rows, 0)).toBe(goods + bads);
  });

  it('give null metrics to a partition without rows or with one class, and is no error', () => {
    const oneClass = {
      ...sample,
      part: sample['part'].map((part, row) => (part === 'test' && sample['bad'][row] === '1' ? 'dev' : part)),
    };
    const fitted = result({}, oneClass);
    expect(fitted.metrics.holdOut).toBeNull();
    expect(fitted.metrics.outOfTime).toBeNull();
    expect(fitted.counts.holdOut.bads).toBe(0);
    expect(fitted.psi.holdOut).not.toBeNull();
  });
});

describe('after the fit', () => {
  it('prior correction moves the intercept alone, by the formula of King and Zeng (from memory)', () => {
    const plain = result();
    const corrected = result({ priorCorrection: { populationBadRate: 0.03 } });
    const y = plain.counts.development.bads / (plain.counts.development.goods + plain.counts.development.bads);
    close(corrected.intercept - plain.intercept, Math.log((0.97 / 0.03) * (y / (1 - y))), 1e-12);
    expect(coefficients(corrected)).toEqual(coefficients(plain));
    expect(corrected.path).toEqual(plain.path);
  });

  it('recalibration leaves the hold-out with slope 1 and nothing in the large', () => {
    const fitted = result({ recalibration: { on: 'holdOut' }, fit: { mixing: 1, lambda: { value: 0.05 } } });
    close(fitted.metrics.holdOut?.calibrationSlope ?? NaN, 1, 1e-7);
    close(fitted.metrics.holdOut?.calibrationIntercept ?? NaN, 0, 1e-7);
    close(fitted.metrics.holdOut?.calibrationInTheLarge ?? NaN, 0, 1e-7);
    expect(fitted.intercept).not.toBe(fitted.path[0].intercept);
  });

  it('a refit of what was kept is the unpenalised fit of those characteristics', () => {
    const lasso = { mixing: 1, lambda: { value: 0.12 } };
    const kept = coefficients(result({ fit: lasso }));
    expect(kept.filter((value) => value === 0).length).toBeGreaterThan(0);
    const refitted = result({ fit: { ...lasso, refit: 'kept' } });
    const only = [AGE, INCOME, HOME].filter((_, index) => kept[index] !== 0);
    const unpenalised = result({ characteristics: only, fit: { mixing: 1, lambda: { value: 0 } } });
    close(refitted.intercept, unpenalised.intercept, 1e-7);
    expect(refitted.characteristics.filter((one) => one.coefficient !== 0).map((one) => one.column)).toEqual(
      only.map((one) => one.column),
    );
    only.forEach((one, index) =>
      close(
        refitted.characteristics.find((other) => other.column === one.column)?.coefficient ?? NaN,
        unpenalised.characteristics[index].coefficient ?? NaN,
        1e-7,
      ),
    );
    expect(refitted.lambda).toBe(0.12);
  });

  it('a refit on all rows uses them, with the tables of development', () => {
    const { fitted, result: made } = run({ fit: { mixing: 1, lambda: { value: 0.005 }, refit: 'all-rows' } });
    const plain = result();
    expect(made.characteristics[0].bins.map((bin) => bin.woe)).toEqual(plain.characteristics[0].bins.map((bin) => bin.woe));
    expect(coefficients(made)).not.toEqual(coefficients(plain));
    expect(fitted.fit.deviance).toBeGreaterThan(plain.deviance * 1.2);
  });

  it('limits hold, and a multiplier of 0 keeps a characteristic always', () => {
    const fitted = result({
      characteristics: [{ ...AGE, upper: 0.1 }, { ...INCOME, penaltyMultiplier: 0 }, HOME],
      fit: { mixing: 1, lambda: { value: 0.2 } },
    });
    expect(fitted.characteristics[0].coefficient).toBeLessThanOrEqual(0.1);
    expect(fitted.characteristics[1].coefficient).toBeGreaterThan(0);
    expect(fitted.characteristics[2].coefficient).toBe(0);
    expect(fitted.optimalityResidual).toBeLessThanOrEqual(1e-9);
  });
});

describe('choosing the penalty', () => {
  const grid = { grid: [0.1, 0.05, 0.02, 0.01, 0.005, 0.001] };

  it('"value" with a grid is its last; the rules follow cross-validation', () => {
    expect(result({ fit: { mixing: 1, lambda: grid } }).lambda).toBe(0.001);
    for (const choose of ['minimum', 'one-standard-error'] as const) {
      const fitted = result({ fit: { mixing: 1, lambda: grid, choose, folds: { count: 5, seed: 1 } } });
      const validated = fitted.crossValidation;
      if (validated === null) throw new Error('no cross-validation');
      const place = choose === 'minimum' ? validated.minimum : validated.oneStandardError;
      expect(fitted.lambda).toBe(grid.grid[place]);
      expect(validated.mean[validated.minimum]).toBe(Math.min(...validated.mean));
    }
  });

  it('takes the mixing with the smallest deviance by the rule', () => {
    const fit = { lambda: { count: 20, smallestRatio: 0.01 }, choose: 'minimum', folds: { count: 4, seed: 2 } };
    const single = [0, 0.5, 1].map((mixing) => result({ fit: { ...fit, mixing } }));
    const best = single.reduce((a, b) =>
      (b.crossValidation?.mean[b.crossValidation.minimum] ?? 0) < (a.crossValidation?.mean[a.crossValidation.minimum] ?? 0)
        ? b
        : a,
    );
    const listed = result({ fit: { ...fit, mixing: [0, 0.5, 1] } });
    expect(listed.mixing).toBe(best.mixing);
    expect(listed.crossValidation).toEqual(best.crossValidation);
  });

  it('says at which penalties a fold did not converge', () => {
    // Of owners only rows of fold 1 are bad: without it the unpenalised indicator has no finite coefficient.
    const owners = sample['home'].map((home, row) => home === 'owner' && sample['bad'][row] !== 'i');
    const bad = sample['bad'].map((value, row) => (owners[row] ? (sample['fold'][row] === '1' ? '1' : '0') : value));
    const characteristics = [
      { ...HOME, groups: [['rent'], ['owner'], ['parents', 'other']], coding: 'indicator', penaltyMultiplier: 0 },
      AGE,
    ];
    const fit = { mixing: 1, lambda: { grid: [0.01, 0.002] }, choose: 'minimum', folds: { column: 'fold' } };
    const separated = result({ characteristics, fit }, { ...sample, bad });
    expect(separated.crossValidation?.notConverged).toEqual([0, 1]);
    expect(separated.converged).toBe(true);
    expect(result({ characteristics, fit }).crossValidation).not.toHaveProperty('notConverged');
  });

  it('classing in folds: "cuts" with bins made by hand equals "woe"; automatic bins are cut anew', () => {
    const automatic = {
      made: 'automatic',
      fineClasses: 20,
      smallestShare: 0.05,
      smallestGoods: 5,
      smallestBads: 5,
      mostBins: 5,
      smallestDifference: 0.02,
      trend: 'any',
    };
    const validated = (classing: string, characteristics: object[]): { mean: number[]; held: number } => {
      const spec = { characteristics, fit: { mixing: 0, lambda: grid, folds: { count: 4, seed: 1, classing } } };
      const { fitted } = run(spec);
      return { mean: fitted.trained.crossValidation?.mean ?? [], held: fitted.trained.heldByHand };
    };
    const byHand = [AGE, INCOME, HOME];
    expect(validated('cuts', byHand).mean).toEqual(validated('woe', byHand).mean);
    expect(validated('cuts', byHand).held).toBe(3);
    expect(validated('woe', byHand).mean).not.toEqual(validated('once', byHand).mean);
    const cut = [
      { ...AGE, classing: automatic },
      { ...INCOME, classing: automatic },
      { ...HOME, classing: automatic },
    ];
    const anew = validated('cuts', cut);
    expect(anew.held).toBe(0);
    expect(anew.mean).not.toEqual(validated('woe', cut).mean);
    expect(validated('cuts', [{ ...AGE, classing: automatic, missing: 1 }]).held).toBe(1);
    // Indicators may have other bins in every fold.
    expect(
      validated(
        'cuts',
        cut.map((one) => ({ ...one, coding: 'indicator' })),
      ).mean.every(Number.isFinite),
    ).toBe(true);
  });

  it('names bin and fold where smoothing is off and a training part has an empty cell', () => {
    const rare: Sample = {
      ...sample,
      home: sample['home'].map((home, row) => (sample['part'][row] === 'dev' && home === 'other' ? 'rent' : home)),
    };
    const rows = Array.from(rare['home'].keys()).filter((row) => rare['part'][row] === 'dev' && rare['bad'][row] !== 'i');
    const good = rows.find((row) => rare['bad'][row] === '0') ?? 0;
    const bad = rows.find((row) => rare['bad'][row] === '1') ?? 0;
    rare['home'][good] = 'yurt';
    rare['home'][bad] = 'yurt';
    const more = (classing: string): object => ({
      characteristics: [{ column: 'home', kind: 'categorical', groups: [['owner'], ['rent'], ['parents'], ['yurt']] }, INCOME],
      woe: { when: 'never' },
      fit: { mixing: 1, lambda: grid, folds: { count: 4, seed: 1, classing } },
    });
    expect(run(more('once'), rare).result.crossValidation).not.toBeNull();
    try {
      run(more('woe'), rare);
      throw new Error('nothing was refused');
    } catch (error) {
      if (!(error instanceof ReplayError)) throw error;
      expect(error.problems[0]).toMatchObject({ code: 'zero-cell', where: { column: 'home', bin: 'yurt' } });
      expect(error.problems[0].where.fold).toBeGreaterThanOrEqual(1);
    }
  });
});

describe('the second solver', () => {
  it('agrees to 1e-6 and is judged by the same conditions', () => {
    const spec = { fit: { mixing: 0.5, lambda: { value: 0.01 } } };
    const first = run(spec);
    const second = replay({
      specification: specificationOf(spec),
      specificationSha256: none,
      dataSha256: none,
      source: sourceOfSample(sample),
      version: '1',
      method: 'independent',
    });
    first.result.characteristics.forEach((one, index) =>
      close(second.result.characteristics[index].coefficient ?? NaN, one.coefficient ?? NaN, 1e-6),
    );
    expect(optimalityResidual(second.fitted.trained.problem, second.fitted.fit)).toBeLessThanOrEqual(1e-9);
    expect(second.result.solver.name).not.toBe(first.result.solver.name);
  });
});

describe('declined applicants', () => {
  const declined = (method: string, more: object = {}): object => ({
    declined: { column: 'decision', values: ['declined'], method, ...more },
  });
  const weightIn = (made: Result, characteristic: number): number =>
    made.characteristics[characteristic].bins.reduce((sum, bin) => sum + bin.goods + bin.bads, 0);

  it('change nothing with "none", and are never in a metric', () => {
    const left = result(declined('none'));
    const removed = result(
      {},
      repeatedRows(sample, (row) => (sample['decision'][row] === 'declined' ? 0 : 1)),
    );
    expect(left.characteristics).toEqual(removed.characteristics);
    expect(left.metrics).toEqual(removed.metrics);
    expect(left.counts.declined).toBe(sample['decision'].filter((text) => text === 'declined').length);
    for (const method of ['reweighting', 'fuzzy', 'parcelling']) {
      const made = result(declined(method));
      expect(made.bands.map((band) => band.development.rows).reduce((a, b) => a + b)).toBe(
        left.counts.development.goods + left.counts.development.bads,
      );
      expect(coefficients(made)).not.toEqual(coefficients(left));
    }
  });

  it('enter WOE as one row of weight one by "fuzzy" and "parcelling"', () => {
    const left = result(declined('none'));
    const inDevelopment = sample['decision'].filter((text, row) => text === 'declined' && sample['part'][row] === 'dev').length;
    for (const method of ['fuzzy', 'parcelling']) {
      const made = result(declined(method));
      // Income has no unseen values, so its bins hold everyone.
      close(weightIn(made, 1), weightIn(left, 1) + inDevelopment, 1e-9);
      expect(made.characteristics[1].bins.reduce((sum, bin) => sum + bin.rows, 0)).toBe(weightIn(left, 1) + inDevelopment);
    }
  });

  it('get more bads by "parcelling" with a larger uplift', () => {
    const bads = (uplift: number): number =>
      result(declined('parcelling', { uplift })).characteristics[1].bins.reduce((sum, bin) => sum + bin.bads, 0);
    const [known, even, half] = [
      result(declined('none')).characteristics[1].bins.reduce((sum, bin) => sum + bin.bads, 0),
      bads(1),
      bads(1.5),
    ];
    expect(half).toBeGreaterThan(even);
    // Below the cap of 1 the inferred bads are proportional to the uplift.
    expect((half - known) / (even - known)).toBeLessThanOrEqual(1.5 + 1e-12);
  });

  it('weigh accepted rows by 1/P(accept) by "reweighting": the mean weight gives back everyone', () => {
    const { fitted, prepared } = run(declined('reweighting'));
    const weights = fitted.trained.fitRows.weights ?? new Float64Array(0);
    expect(weights.every((weight) => weight > 1)).toBe(true);
    const accepted = weights.length;
    const everyone =
      accepted + Array.from(prepared.outcome).filter((outcome, row) => outcome === 3 && prepared.partition[row] === 1).length;
    close(weights.reduce((sum, weight) => sum + weight, 0) / everyone, 1, 0.02);
  });

  it('are never held out in cross-validation', () => {
    const fit = { mixing: 1, lambda: { grid: [0.1, 0.01] }, folds: { count: 4, seed: 1 } };
    const { fitted, result: made } = run({ ...declined('fuzzy'), fit });
    const held = fitted.trained.crossValidation?.folds.reduce((sum, fold) => sum + fold.weight, 0);
    expect(held).toBe(made.counts.development.goods + made.counts.development.bads);
  });
});

describe('one path, many evaluations', () => {
  it('evaluates every point without a refit, the chosen one as in the result', () => {
    const spec = specificationOf({ fit: { mixing: 1, lambda: { count: 20, smallestRatio: 0.01 } } });
    const { prepared, coded, result: made } = run({ fit: { mixing: 1, lambda: { count: 20, smallestRatio: 0.01 } } });
    const [path] = trainPaths({ specification: spec, prepared, coded });
    expect(choosePenalty(spec, [path]).index).toBe(path.fits.length - 1);
    const evaluator = evaluatorOf(spec, prepared, coded, path.tables);
    const evaluated = path.fits.map((fit) =>
      evaluateFit(evaluator, path.terms, fit, { figures: 'path', partitions: ['development', 'holdOut'] }),
    );
    expect(evaluated.at(-1)?.metrics.holdOut?.auc).toBe(made.metrics.holdOut?.auc);
    expect(evaluated.at(-1)?.metrics.holdOut?.hosmerLemeshow).toBeNull();
    expect(evaluated[0].metrics.development?.auc).toBe(0.5);
  });
});
