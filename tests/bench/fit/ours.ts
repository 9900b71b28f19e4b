import { optimalityResidual, stratifiedBootstrap, type Fit } from '@tallystone/numeric';
import { summariseFolds } from '@tallystone/numeric/engine/cross-validation';
import { Engine } from '@tallystone/numeric/engine/engine';
import type { Crew } from '@tallystone/numeric/engine/crew';
import type { CodedProblem } from '@tallystone/numeric/engine/coded-columns';
import type { BenchCase } from './cases';
import type { BenchSample } from './sample';

export interface Timed {
  readonly seconds: number;
  /** Largest optimality residual in double precision; of folds, at several places. */
  readonly residual: number;
}

export interface OurTimes {
  /** `cpu`: seconds of processor time of all threads. */
  readonly path: Timed & { readonly cpu: number };
  readonly cv: Timed & { readonly cpu: number };
  readonly passes: { readonly path: number; readonly cv: number };
  readonly fits: readonly Fit[];
}

const GRID = { count: 100, smallestRatio: 1e-4, earlyStop: true };
/** Folds' fits whose residual is proved in double precision after the clock has stopped. */
export const PROOFS = 40;
const RESAMPLES = 200;

const problemOf = (of: BenchCase, sample: BenchSample): CodedProblem => ({
  columns: sample.columns,
  outcome: sample.outcome,
  penalty: { mixing: of.mixing, standardize: true },
});

const now = (): number => performance.now() / 1000;
const cpu = (): number => (process.cpuUsage().user + process.cpuUsage().system) / 1e6;

/**
 * The path from codes to fits, and the whole of a cross-validation: path, folds at its lambdas, the choice, and the chosen fits at a residual of
 * 1e-9. Laying out counts in both.
 */
export function timeOurs(of: BenchCase, sample: BenchSample, crew: () => Crew): OurTimes {
  const problem = problemOf(of, sample);
  const began = now();
  const cpuBegan = cpu();
  const alone = new Engine(problem, { crew: crew() });
  const { fits } = alone.path(GRID);
  const path = {
    seconds: now() - began,
    cpu: cpu() - cpuBegan,
    residual: Math.max(...fits.map((fit) => fit.optimalityResidual)),
  };
  const pathPasses = alone.passes.count;
  alone.close();

  const from = now();
  const cpuFrom = cpu();
  const engine = new Engine(problem, { folds: sample.folds, crew: crew() });
  const own = engine.path(GRID);
  const lambdas = own.fits.map(({ lambda }) => lambda);
  const found: { fold: number; lambda: number; fit: { intercept: number; coefficients: Float64Array } }[] = [];
  const every = Math.max(1, Math.floor((lambdas.length * 10) / PROOFS));
  let seen = 0;
  const validated = summariseFolds(
    lambdas,
    engine.crossValidate(lambdas, {
      onFoldFit: (fold, index, fit) => void (seen++ % every === 0 && found.push({ fold, lambda: lambdas[index], fit })),
    }),
  );
  if (!validated) throw new Error('A fold did not converge.');
  for (const index of [validated.minimum, validated.oneStandardError]) {
    const chosen = engine.fitAt(lambdas[index], { start: own.fits[index], tolerance: 1e-9 });
    if (chosen.optimalityResidual > 1e-9) throw new Error(`The chosen fit reached ${chosen.optimalityResidual} only.`);
  }
  const seconds = now() - from;
  const cpuSeconds = cpu() - cpuFrom;
  const passes = engine.passes.count - pathPasses;
  const residual = Math.max(...found.map(({ fold, lambda, fit }) => engine.residualOf(lambda, fit, fold)));
  engine.close();
  return { path, cv: { seconds, cpu: cpuSeconds, residual }, passes: { path: pathPasses, cv: passes }, fits };
}

/** Resamples at 20 penalties each, columns held: seconds and the largest residual at several of them. */
export function timeBootstrap(of: BenchCase, sample: BenchSample, crew: () => Crew): Timed {
  const problem = problemOf(of, sample);
  const from = now();
  const engine = new Engine(problem, { crew: crew(), counted: true });
  const { fits } = engine.path({ count: 20, smallestRatio: 1e-3, earlyStop: false });
  const lambdas = fits.map(({ lambda }) => lambda);
  const found: { resample: number; place: number; fit: { intercept: number; coefficients: Float64Array } }[] = [];
  engine.resample(lambdas, { seed: 1, count: RESAMPLES }, ({ resample, place, intercept, coefficients, converged }) => {
    if (!converged) throw new Error(`Resample ${resample} did not converge.`);
    if ((resample * lambdas.length + place) % 199 === 0) found.push({ resample, place, fit: { intercept, coefficients } });
  });
  const seconds = now() - from;
  engine.close();
  const columns = sample.columns.map(({ codes, values }) => Float64Array.from(codes, (code) => values[code]));
  const residual = Math.max(
    ...found.map(({ resample, place, fit }) => {
      const weights = Float64Array.from(stratifiedBootstrap(sample.outcome, 1, resample));
      return optimalityResidual(
        { columns, outcome: sample.outcome, weights, penalty: problem.penalty },
        { ...fit, lambda: lambdas[place] },
      );
    }),
  );
  return { seconds, residual };
}

/** One bin of one column is split in two; the fit at one penalty is made again from the one before. */
export function timeRefit(of: BenchCase, sample: BenchSample, crew: () => Crew): Timed {
  const problem = problemOf(of, sample);
  const engine = new Engine(problem, { crew: crew() });
  const { fits } = engine.path({ count: 40, smallestRatio: 1e-3, earlyStop: false }, { tolerance: 1e-9 });
  const before = fits[25];
  const [first] = sample.columns;
  const values = Float64Array.of(...first.values, first.values[1] + 0.1);
  const codes = first.codes.map((code, i) => (code === 1 && i % 3 === 0 ? values.length - 1 : code));
  const from = now();
  const changed = engine.withColumn(0, { kind: 'coded', codes, values });
  const fit = changed.fitAt(before.lambda, { start: before, tolerance: 1e-9 });
  const seconds = now() - from;
  changed.close();
  const cold = new Engine({ ...problem, columns: [{ kind: 'coded', codes, values }, ...problem.columns.slice(1)] }, {});
  const residual = cold.residualOf(fit.lambda, fit);
  cold.close();
  return { seconds, residual };
}
