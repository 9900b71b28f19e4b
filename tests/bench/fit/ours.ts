import type { Fit } from '@tallystone/numeric';
import { Engine, summariseFolds } from '@tallystone/numeric/engine/engine';
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
  readonly path: Timed;
  readonly cv: Timed;
  readonly passes: { readonly path: number; readonly cv: number };
  readonly fits: readonly Fit[];
}

const GRID = { count: 100, smallestRatio: 1e-4, earlyStop: true };
/** Folds' fits whose residual is proved in double precision after the clock has stopped. */
const PROOFS = 40;

const problemOf = (of: BenchCase, sample: BenchSample): CodedProblem => ({
  columns: sample.columns,
  outcome: sample.outcome,
  penalty: { mixing: of.mixing, standardize: true },
});

const now = (): number => performance.now() / 1000;

/**
 * The path from codes to fits, and the whole of a cross-validation: path, folds at its lambdas, the choice, and the chosen fits at a residual of
 * 1e-9. Laying out counts in both.
 */
export function timeOurs(of: BenchCase, sample: BenchSample, crew: () => Crew): OurTimes {
  const problem = problemOf(of, sample);
  const began = now();
  const alone = new Engine(problem, { crew: crew() });
  const { fits } = alone.path(GRID);
  const path = { seconds: now() - began, residual: Math.max(...fits.map((fit) => fit.optimalityResidual)) };
  const pathPasses = alone.passes.count;
  alone.close();

  const from = now();
  const engine = new Engine(problem, { folds: sample.folds, crew: crew() });
  const own = engine.path(GRID);
  const lambdas = own.fits.map(({ lambda }) => lambda);
  const found: { fold: number; lambda: number; fit: { intercept: number; coefficients: Float64Array } }[] = [];
  const every = Math.max(1, Math.floor((lambdas.length * 10) / PROOFS));
  let seen = 0;
  const validated = summariseFolds(
    lambdas,
    engine.crossValidate(lambdas, { onFoldFit: (fold, index, fit) => void (seen++ % every === 0 && found.push({ fold, lambda: lambdas[index], fit })) }),
  );
  if (!validated) throw new Error('A fold did not converge.');
  for (const index of [validated.minimum, validated.oneStandardError]) {
    const chosen = engine.fitAt(lambdas[index], { start: own.fits[index], tolerance: 1e-9 });
    if (chosen.optimalityResidual > 1e-9) throw new Error(`The chosen fit reached ${chosen.optimalityResidual} only.`);
  }
  const seconds = now() - from;
  const passes = engine.passes.count - pathPasses;
  const residual = Math.max(...found.map(({ fold, lambda, fit }) => engine.residualOf(lambda, fit, fold)));
  engine.close();
  return { path, cv: { seconds, residual }, passes: { path: pathPasses, cv: passes }, fits };
}
